import { AppError } from '../errors/app-error'

/** Where in a table something is wrong, counted from 1 as people and text editors do. */
export interface Place {
  line?: number
  column?: number
}

const maxQuoted = 40

/** Text of a file as it may appear in a message: short, with invisible characters written as code points. */
export const quote = (text: string): string => {
  const cut = text.length > maxQuoted ? `${text.slice(0, maxQuoted)}…` : text
  const shown = cut.replace(/[\p{C}\p{Zl}\p{Zp}\u00a0\u2007\u2009\u202f]/gu, (character) => {
    const point = character.codePointAt(0) ?? 0
    return `<U+${point.toString(16).toUpperCase().padStart(4, '0')}>`
  })
  return `"${shown}"`
}

export const placeText = ({ line, column }: Place): string =>
  [line === undefined ? '' : `line ${line}`, column === undefined ? '' : `column ${column}`].filter(Boolean).join(', ')

/** The one refusal of the reader: where, what was found, what is expected, in one sentence. */
export const unreadable = (place: Place, found: string, expected: string): AppError => {
  const where = placeText(place)
  const message = `${where === '' ? 'The file' : `The file, ${where}`}: found ${found}; expected ${expected}.`
  const path = ['file', place.line, place.column].filter((part) => part !== undefined)
  return new AppError('measurement/unreadable', { detail: message, issues: [{ path, message }] })
}
