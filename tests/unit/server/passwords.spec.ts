import { describe, expect, it } from 'vitest'
import { NewPasswordSchema } from '../../../shared/schemas/account'
import { findPasswordObjection } from '../../../server/services/password-blocklist'

const context = ['Mira Holm', 'mira.holm@institute.example', 'Colloidal Dots Group']

/** The whole judgement of a new password: its length, then the list. */
const judge = async (password: string): Promise<string> => {
  if (!NewPasswordSchema.safeParse(password).success) return 'length'
  const objection = await findPasswordObjection(password, context)
  if (objection === null) return 'fine'
  return /leaked/.test(objection)
    ? 'leaked'
    : /repeat/.test(objection)
      ? 'repeats'
      : /run/.test(objection)
        ? 'run'
        : /made of/.test(objection)
          ? 'words'
          : 'common'
}

const fine = [
  'violet umbrella seven tides',
  'four blue herons wait',
  'Tee mit Zitrone um fünf',
  'les nuages passent vite',
  'x9$kQ!2vLp#8Zr&m',
  '  leading and trailing  ',
  'кошка сидит на крыше дома',
  '窓の外に雪が静かに降っている朝だ',
  '🦊🪐🌋🧭🪁🛶🎻🧲🔭🪻🦉🐚🍁🧊🎏',
  'éèêëēėę ñ ü ø å ß ð',
  'SELECT * FROM chairs; --',
  '<script>not a tag</script>',
  'tab\tand newline\nare fine',
  'nul \0 is a character too',
  'mira likes long winter walks',
  'phonons are not my password because tea',
  'a'.repeat(1) + 'bqcwdtezfxgy' + '4711',
  'j7'.repeat(4) + ' river stones',
  'Zug 14:32 nach Göteborg',
  'olive trees on the hill 2026',
  '9182 7364 5546 3728 1900',
  'ｍｏｕｎｔａｉｎ ｇｏａｔ ｓｏｎｇ',
]

const refused: [string, string][] = [
  ['', 'length'],
  ['short', 'length'],
  ['fourteen signs', 'length'],
  ['e\u0301'.repeat(14), 'length'],
  ['🦊'.repeat(14), 'length'],
  ['x'.repeat(257), 'length'],
  ['🦊'.repeat(257), 'length'],
  ['123456789123456789', 'run'],
  ['1234567890123456', 'run'],
  ['qwertyuiopasdfghjkl', 'run'],
  ['abcdefghijklmnopqrst', 'run'],
  ['zyxwvutsrqponmlk', 'run'],
  ['qwertzuiopasdfgh', 'run'],
  ['ａｂｃ ｄｅｆ ｇｈｉ ｊｋｌ ｍｎｏ ｐ', 'run'],
  ['azertyuiopqsdfgh', 'run'],
  ['1q2w3e4r5t6y7u8i', 'run'],
  ['0987654321098765', 'run'],
  ['qwertyuiop12345!', 'leaked'],
  ['aaaaaaaaaaaaaaaa', 'repeats'],
  ['abcabcabcabcabcabc', 'repeats'],
  ['................', 'repeats'],
  ['tea tea tea tea ', 'repeats'],
  ['passwordpassword', 'leaked'],
  ['Password12345678', 'common'],
  ['linewrightlinewright', 'words'],
  ['Linewright-2026-!', 'words'],
  ['exciton phonon 1', 'words'],
  ['spectroscopy 2026', 'words'],
  ['mira.holm.mira.holm', 'words'],
  ['Mira Holm Mira 1990', 'words'],
  ['colloidal dots 123', 'words'],
  ['institute.example!', 'words'],
  ['iloveyou!!!!!!!!', 'leaked'],
  ['!!!!!sunshine!!!!!', 'leaked'],
  ['superman superman', 'common'],
  ['000000football000000', 'common'],
  ['Monkey! Monkey! Monkey!', 'common'],
  ['letmein letmein 1', 'common'],
  ['dragon.dragon.dragon', 'repeats'],
]

describe('a new password', () => {
  it('is judged in at least sixty cases', () => {
    expect(fine.length + refused.length).toBeGreaterThanOrEqual(60)
  })

  it.each(fine)('may be %j', async (password) => {
    expect(await judge(password)).toBe('fine')
  })

  it.each(refused)('may not be %j: %s', async (password, reason) => {
    expect(await judge(password)).toBe(reason)
  })

  it('is judged in time that its length cannot stretch', async () => {
    await findPasswordObjection('violet umbrella seven tides', context)
    for (const password of ['ab1'.repeat(85), 'qwerty1234'.repeat(25), 'é'.repeat(250), 'a'.repeat(255) + 'b']) {
      const started = performance.now()
      await findPasswordObjection(password, context)
      expect(performance.now() - started).toBeLessThan(500)
    }
  })
})
