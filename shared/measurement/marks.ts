import type { ReadingQuestion, ReadingWarning } from '../schemas/measurement'
import { blanks, shapeOf, type Marks } from './number-text'
import { quote, unreadable } from './unreadable'

/**
 * Which mark separates the decimals and which groups the thousands. Every number of the file is evidence:
 *
 * | number    | says                                                              |
 * | --------- | ----------------------------------------------------------------- |
 * | 0.5 12.34 | the point is decimal (a group has three digits and never leads 0)  |
 * | 1,850.5   | point decimal, comma groups                                       |
 * | 1,850,000 | comma groups                                                      |
 * | 1,850     | 1850 or 1.85: nothing, on its own                                 |
 *
 * Evidence for both marks as decimal is a contradiction and refused. Only ambiguous numbers: a person is asked.
 */

interface Seen {
  line: number
  text: string
}

type Sign =
  | 'pointDecimal'
  | 'commaDecimal'
  | 'pointGroup'
  | 'commaGroup'
  | 'pointEither'
  | 'commaEither'
  | 'blankGroup'
  | 'apostropheGroup'

/** First number of the file that showed each sign. */
export type MarkEvidence = Partial<Record<Sign, Seen>>

const grouped = (text: string, mark: string): boolean => {
  const groups = text.split(mark)
  return groups.every((group, index) => (index === 0 ? /^[1-9][0-9]{0,2}$/ : /^[0-9]{3}$/).test(group))
}

const names = { '.': 'point', ',': 'comma' } as const
const otherGroups = [
  ['apostropheGroup', /['\u2019]/g],
  ['blankGroup', blanks],
] as const

/** Adds what one cell says. Cells that are no number say nothing here; the reading pass refuses them. */
export const addEvidence = (evidence: MarkEvidence, cell: string, line: number): void => {
  // Fast way out for the most frequent cell, which says nothing new.
  if (
    evidence.pointDecimal !== undefined &&
    /^-?[0-9]+\.[0-9]+$/.test(cell) &&
    !/^-?[1-9][0-9]{0,2}\.[0-9]{3}$/.test(cell)
  )
    return
  const parts = shapeOf(cell)
  if (parts === undefined) return
  const note = (sign: Sign) => {
    evidence[sign] ??= { line, text: cell.trim() }
  }
  let body = parts.body
  for (const [sign, pattern] of otherGroups) {
    if (body.search(pattern) === -1) continue
    if (!grouped(body.replace(pattern, ' ').replace(/[.,][0-9]*$/, ''), ' ')) return
    note(sign)
    body = body.replace(pattern, '')
  }
  const hasOtherGroup = body !== parts.body
  const points = body.split('.').length - 1
  const commas = body.split(',').length - 1
  if (points > 0 && commas > 0) {
    const decimal = body.lastIndexOf('.') > body.lastIndexOf(',') ? '.' : ','
    const group = decimal === '.' ? ',' : '.'
    const [whole = '', ...fractions] = body.split(decimal)
    if (fractions.length > 1 || !grouped(whole, group)) return
    note(`${names[decimal]}Decimal`)
    note(`${names[group]}Group`)
    return
  }
  const mark = points > 0 ? '.' : ','
  const count = points + commas
  if (count === 0) return
  if (count > 1) {
    if (grouped(body, mark)) note(`${names[mark]}Group`)
  } else if (!hasOtherGroup && parts.exponent === undefined && grouped(body, mark)) note(`${names[mark]}Either`)
  else note(`${names[mark]}Decimal`)
}

export interface MarkDecision {
  marks: Marks
  question?: ReadingQuestion
  warning?: ReadingWarning
}

const contradiction = (a: Seen, b: Seen) =>
  unreadable(
    { line: b.line },
    `${quote(b.text)} although line ${a.line} has ${quote(a.text)}`,
    'one decimal mark in the whole file',
  )

const groupOf = (evidence: MarkEvidence, comma: boolean, point: boolean): Marks['groupMark'] => {
  if (comma) return 'comma'
  if (point) return 'point'
  if (evidence.apostropheGroup !== undefined) return 'apostrophe'
  return evidence.blankGroup === undefined ? 'none' : 'blank'
}

/** A question with the two ways to read numbers such as 1,850. */
const ask = (seen: Seen, mark: 'point' | 'comma', otherIsGroup: boolean): ReadingQuestion => {
  const other = mark === 'point' ? 'comma' : 'point'
  const [whole = '', rest = ''] = seen.text.split(mark === 'point' ? '.' : ',')
  return {
    field: 'decimalMark',
    message: `Line ${seen.line} has ${quote(seen.text)}: the ${mark} may be the decimal mark or group the thousands.`,
    choices: [
      {
        label: `Decimal ${mark}: ${whole}.${rest}`,
        change: { decimalMark: mark, groupMark: otherIsGroup ? other : 'none' },
      },
      { label: `Thousands ${mark}: ${whole}${rest}`, change: { decimalMark: other, groupMark: mark } },
    ],
  }
}

/** Decides the marks from all the evidence of a file, or says what must be asked. */
export const decideMarks = (evidence: MarkEvidence): MarkDecision => {
  const { pointDecimal, commaDecimal, pointGroup, commaGroup, pointEither, commaEither } = evidence
  const forPoint = pointDecimal ?? commaGroup
  const forComma = commaDecimal ?? pointGroup
  if (forPoint !== undefined && forComma !== undefined) throw contradiction(forPoint, forComma)

  const decided = (decimalMark: Marks['decimalMark'], group: Seen | undefined): MarkDecision => {
    const groupMark = groupOf(
      evidence,
      decimalMark === 'point' && group !== undefined,
      decimalMark === 'comma' && group !== undefined,
    )
    const seen = group ?? evidence.apostropheGroup ?? evidence.blankGroup
    if (groupMark === 'none' || seen === undefined) return { marks: { decimalMark, groupMark: 'none' } }
    return {
      marks: { decimalMark, groupMark },
      warning: {
        code: 'numbers-grouped',
        message: `Thousands are grouped by ${groupMark === 'apostrophe' ? 'an' : 'a'} ${groupMark}, as in ${quote(seen.text)} on line ${seen.line}.`,
      },
    }
  }

  if (forPoint !== undefined) return decided('point', commaGroup ?? commaEither)
  if (forComma !== undefined) return decided('comma', pointGroup ?? pointEither)
  // A file has one thousands mark: where blanks or apostrophes group, the ambiguous mark is the decimal one.
  const hasOtherGroup = groupOf(evidence, false, false) !== 'none'
  if (hasOtherGroup && (pointEither === undefined || commaEither === undefined))
    return decided(commaEither === undefined ? 'point' : 'comma', undefined)
  if (commaEither !== undefined)
    return {
      marks: { decimalMark: 'comma', groupMark: pointEither === undefined ? 'none' : 'point' },
      question: ask(commaEither, 'comma', pointEither !== undefined),
    }
  if (pointEither !== undefined)
    return { marks: { decimalMark: 'point', groupMark: 'none' }, question: ask(pointEither, 'point', false) }
  return decided('point', undefined)
}
