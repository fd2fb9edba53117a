import { limits } from '../utils/limits'
import type { ByteSource } from './byte-source'
import { isBlank, isComment, splitFields } from './fields'
import { isForeignNumber, type Layout } from './layout'
import { addEvidence, type MarkEvidence } from './marks'
import { isMissing, looksLikeNumber, oddity } from './number-text'
import { readLines, type Encoding, type Line } from './text-lines'
import { quote, unreadable } from './unreadable'

/** What one pass over all rows tells before any number is read. */
export interface BodyScan {
  evidence: MarkEvidence
  rows: number
  lastRow: number
  /** Lines behind the last row of numbers, when any of them is text. */
  footerLines: number
}

const isCell = (field: string) => looksLikeNumber(field) || isMissing(field)

const isRow = (fields: string[], layout: Layout): boolean => {
  const filled = fields.findLastIndex((field) => field !== '') + 1
  if (filled > layout.columns || fields.length <= (layout.numeric[1] ?? 0)) return false
  const cells = layout.numeric.map((index) => fields[index] ?? '')
  const like = cells.filter(isCell).length
  return isCell(cells[0] ?? '') && 2 * like >= cells.length && cells.some(looksLikeNumber)
}

/** Text below a table: it does not begin with a number, in whatever script. */
const isRemark = (fields: string[]): boolean => {
  const first = fields.find((field) => field !== '') ?? ''
  return /[\p{L}\p{P}]/u.test(first) && !looksLikeNumber(first) && !isForeignNumber(first)
}

const badRow = (line: Line, fields: string[], layout: Layout) => {
  const column = layout.numeric.find((index) => fields[index] !== undefined && !isCell(fields[index]))
  if (column !== undefined && fields.length === layout.columns)
    return unreadable(
      { line: line.number, column: column + 1 },
      quote(fields[column] ?? ''),
      oddity(fields[column] ?? ''),
    )
  return unreadable(
    { line: line.number },
    `${fields.length} ${fields.length === 1 ? 'field' : 'fields'} in ${quote(line.text.trim())}`,
    `a row of ${layout.columns} columns of numbers like the rows before`,
  )
}

/** Counts rows, collects the evidence for the decimal mark and finds where the table ends. */
export const scanBody = (source: ByteSource, encoding: Encoding, layout: Layout): BodyScan => {
  const evidence: MarkEvidence = {}
  let rows = 0
  let lastRow = layout.firstLine
  let lastLine = layout.firstLine
  let stray: { line: Line; fields: string[] } | undefined

  for (const line of readLines(source, encoding)) {
    if (line.number < layout.firstLine) continue
    lastLine = line.number
    if (isBlank(line.text) || isComment(line.text, layout.delimiter)) continue
    const fields = splitFields(line.text, layout.delimiter, line.number)
    if (!isRow(fields, layout)) {
      if (stray === undefined && !isRemark(fields)) throw badRow(line, fields, layout)
      stray ??= { line, fields }
      continue
    }
    if (stray !== undefined) throw badRow(stray.line, stray.fields, layout)
    rows += 1
    // Said here as well as by the reading pass, so that a file of millions of rows is not looked at to its end.
    if (rows > limits.measurementPoints)
      throw unreadable(
        { line: line.number },
        `more than ${limits.measurementPoints} rows`,
        `at most ${limits.measurementPoints}`,
      )
    lastRow = line.number
    for (const index of layout.numeric) addEvidence(evidence, fields[index] ?? '', line.number)
  }
  return { evidence, rows, lastRow, footerLines: stray === undefined ? 0 : lastLine - lastRow }
}
