/**
 * Refuses passwords that guessing programs try first. The length alone keeps most of them out; what is left are long
 * ones from leaked lists, short ones stretched to the length, runs of keys, and words that anyone here would think of.
 */
const productWords = [
  'linewright',
  'lineshape',
  'exciton',
  'phonon',
  'spectrum',
  'spectroscopy',
  'quantumdot',
  'password',
  'passphrase',
]

const runs = [
  'abcdefghijklmnopqrstuvwxyz',
  '01234567890123456789',
  'qwertyuiopasdfghjklzxcvbnm',
  'qwertzuiopasdfghjklyxcvbnm',
  'azertyuiopqsdfghjklmwxcvbn',
  '1qaz2wsx3edc4rfv5tgb6yhn7ujm8ik9ol0p',
  '1q2w3e4r5t6y7u8i9o0p',
].flatMap((run) => [run, [...run].reverse().join('')])

/** Entries shorter than this are too common inside honest passphrases to say anything about the whole. */
const shortestEntry = 6
const shortestRun = 5
const enoughOwnCharacters = 8

const letters = (text: string): string => text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '')

let entries: Promise<Set<string>> | undefined
const loadEntries = (): Promise<Set<string>> =>
  // 49 000 entries from leaked lists; loaded when the first password is chosen, not when the server starts.
  (entries ??= import('@zxcvbn-ts/language-common').then(({ dictionary }) => new Set(dictionary['passwords-common'])))

/** The shortest unit that the text repeats (`abcabcab` repeats `abc`), or the text itself. */
const unitOf = (text: string): string => {
  for (let length = 1; length <= text.length / 2; length++) {
    const unit = text.slice(0, length)
    if (unit.repeat(Math.ceil(text.length / length)).startsWith(text)) return unit
  }
  return text
}

/** Takes out every occurrence of the words, longest first. */
const without = (text: string, words: readonly string[]): string =>
  [...words].sort((a, b) => b.length - a.length).reduce((rest, word) => rest.replaceAll(word, ''), text)

/** Takes out every run of five or more neighbours, the longest at each place. */
const withoutRuns = (text: string): string => {
  let rest = ''
  for (let start = 0; start < text.length; start++) {
    let end = start
    while (end < text.length && runs.some((run) => run.includes(text.slice(start, end + 1)))) end++
    if (end - start >= shortestRun) start = end - 1
    else rest += text[start]
  }
  return rest
}

/** Words from the person's own surroundings: parts of the name, of the e-mail address, of the groups' names. */
const contextWords = (context: readonly string[]): string[] =>
  context.flatMap((text) => text.toLowerCase().split(/[^\p{L}\p{N}]+/u)).filter((word) => word.length >= 4)

/** Why the password is refused, as a sentence for its field; null when it is not. */
export const findPasswordObjection = async (password: string, context: readonly string[]): Promise<string | null> => {
  const common = await loadEntries()
  const lower = password.normalize('NFKC').toLowerCase()
  const plain = letters(lower)
  if (common.has(lower) || common.has(plain)) return 'expected a password that is not on the list of leaked ones'
  if (unitOf(lower).length < enoughOwnCharacters && unitOf(lower) !== lower) {
    return 'expected a password that does not repeat a short piece'
  }
  // Only the beginning can matter: sixty-four characters hold more than any of these patterns.
  const start = plain.slice(0, 64)
  if (withoutRuns(start).length < enoughOwnCharacters && withoutRuns(start) !== start) {
    return 'expected a password that is not a run of neighbouring keys'
  }
  if (
    without(start, [...contextWords(context), ...productWords]).length < enoughOwnCharacters &&
    start.length >= enoughOwnCharacters
  ) {
    return 'expected a password that is not made of your name, your group or this product'
  }
  const core = start.replace(/^\p{N}+|\p{N}+$/gu, '')
  const unit = unitOf(core)
  if ([core, unit].some((text) => text.length >= shortestEntry && common.has(text))) {
    return 'expected a password that is not a common one with digits or signs added'
  }
  return null
}
