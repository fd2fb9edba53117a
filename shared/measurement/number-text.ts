import type { TableReading } from '../schemas/measurement'

/**
 * One cell of a table as a number. Nothing is guessed here: the marks are given, and a cell that does not follow them
 * to the last character is refused. (`parseFloat('1,5')` is 1 and `Number('')` is 0: neither is used on raw text.)
 */

export type Marks = Pick<TableReading, 'decimalMark' | 'groupMark'>

export type Cell =
  | { kind: 'number'; value: number }
  /** Blank, NaN, infinite or a usual sign for "no value". */
  | { kind: 'missing' }
  | { kind: 'bad'; reason: string }

/** Minus signs that typesetting and some locales write: U+2212, en dash, small and full-width hyphen-minus. */
const minusSigns = /[\u2212\u2013\ufe63\uff0d]/g
/** No-break, figure, thin, narrow no-break and ordinary blanks, as they occur between groups of digits. */
export const blanks = /[ \u00a0\u2007\u2009\u202f]/g
const apostrophes = /['\u2019]/g

const missingTexts = new Set(
  ['', '-', '--', '---', '.', '*', '?', 'nan', 'na', 'n/a', 'null', 'none', 'nil', 'inf', 'infinity', 'missing'].concat(
    ['1.#inf', '1.#ind', '1.#qnan', '1.#snan', '#n/a', '#num!', '#div/0!', '#value!', '#nv', '#ref!'],
  ),
)

/** Minus written as ASCII, at the two places where a number may have one. */
export const normaliseSigns = (text: string): string => text.replace(minusSigns, '-')

export const hasUnusualSign = (text: string): boolean => /^[\u2212\u2013\ufe63\uff0d]/.test(text)

export const isMissing = (text: string): boolean => {
  const trimmed = normaliseSigns(text.trim()).toLowerCase()
  return missingTexts.has(trimmed) || missingTexts.has(trimmed.replace(/^[+-]/, ''))
}

/** Sign, digits with whatever marks, exponent; Fortran's D is an exponent too. */
const shape = /^([+-]?)([0-9.,'\u2019 \u00a0\u2007\u2009\u202f]*)(?:[eEdD]([+-]?[0-9]{1,6}))?$/

export interface NumberShape {
  sign: string
  /** Digits and marks without sign and exponent. */
  body: string
  exponent: string | undefined
}

/** The plain notations, which nearly every cell of every file has; anything else is looked at closely. */
const plain = /^[+-]?[0-9]+(?:[.,][0-9]+)?(?:[eE][+-]?[0-9]{1,3})?$/

/** Whether a cell looks like a number in any notation. */
export const looksLikeNumber = (text: string): boolean => plain.test(text) || shapeOf(text) !== undefined

/** Splits a cell into sign, body and exponent; undefined where it does not look like a number in any notation. */
export const shapeOf = (text: string): NumberShape | undefined => {
  const match = shape.exec(normaliseSigns(text.trim()))
  const body = match?.[2] ?? ''
  if (match === null || !/[0-9]/.test(body)) return undefined
  return { sign: match[1] ?? '', body, exponent: match[3] }
}

const groupPatterns: Record<Exclude<Marks['groupMark'], 'none'>, RegExp> = {
  comma: /,/g,
  point: /\./g,
  blank: blanks,
  apostrophe: apostrophes,
}

/** Digits without their thousands marks; undefined where the marks do not stand between groups of three. */
const withoutGroups = (whole: string, groupMark: Marks['groupMark']): string | undefined => {
  if (/^[0-9]*$/.test(whole)) return whole
  if (groupMark === 'none') return undefined
  const groups = whole.split(groupPatterns[groupMark])
  const sound = groups.every((group, index) => (index === 0 ? /^[1-9][0-9]{0,2}$/ : /^[0-9]{3}$/).test(group))
  return sound ? groups.join('') : undefined
}

const markNames = { point: 'a decimal point', comma: 'a decimal comma' } as const

const notThisNotation = (marks: Marks): string =>
  `a number with ${markNames[marks.decimalMark]}${marks.groupMark === 'none' ? ' and no thousands mark' : ''}`

/** Why a cell cannot be a number, in words that name the oddity. */
export const oddity = (text: string): string => {
  if (/[\p{Nd}]/u.test(text.replace(/[0-9]/g, '')))
    return 'a number in digits 0 to 9 (these are digits of another script)'
  if (/[\u200b-\u200f\u2060-\u2064\ufeff\u202a-\u202e\u00ad]/.test(text)) return 'a number without invisible characters'
  if (/^[+-]?0[xX]/.test(text)) return 'a decimal number (this is hexadecimal)'
  if (/^[=@]/.test(text)) return 'a number (this is a formula)'
  if (/[0-9]\s*[%‰]/.test(text)) return 'a plain number without a percent sign'
  if (/[0-9]\s*[\p{L}°µ]/u.test(text)) return 'a plain number without a unit'
  return 'a number'
}

/** Reads one cell under the given marks. */
export const readCell = (text: string, marks: Marks): Cell => {
  const trimmed = text.trim()
  // The usual case first: digits with a point, which the platform reads exactly.
  if (marks.decimalMark === 'point' && /^-?[0-9]{1,17}(?:\.[0-9]{0,20})?$/.test(trimmed))
    return { kind: 'number', value: Number(trimmed) + 0 }
  const parts = shapeOf(trimmed)
  if (parts === undefined) return isMissing(trimmed) ? { kind: 'missing' } : { kind: 'bad', reason: oddity(trimmed) }
  const [whole = '', fraction = '', ...more] = parts.body.split(marks.decimalMark === 'point' ? '.' : ',')
  const digits = withoutGroups(whole, marks.groupMark)
  if (more.length > 0 || digits === undefined || !/^[0-9]*$/.test(fraction) || digits + fraction === '')
    return { kind: 'bad', reason: notThisNotation(marks) }
  const value = Number(`${parts.sign}${digits === '' ? '0' : digits}.${fraction || '0'}e${parts.exponent ?? '0'}`)
  if (!Number.isFinite(value)) return { kind: 'bad', reason: 'a number below 1.8e308' }
  return { kind: 'number', value: value + 0 }
}
