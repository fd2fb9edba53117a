import type { ReadingQuestion, ReadingWarning, TableReading } from '../schemas/measurement'
import type { ByteSource } from './byte-source'
import { findLabels, findRoles, type Labels } from './columns'
import { splitFields } from './fields'
import { delimiterQuestion, findLayout, type Layout } from './layout'
import { decideMarks } from './marks'
import { looksLikeNumber } from './number-text'
import { findAxisUnit, findJacobian, findMedium } from './questions'
import { readPoints, type Points } from './read-points'
import { scanBody } from './scan-body'
import type { Encoding, Line } from './text-lines'
import { quote } from './unreadable'

/** Rows of numbers above the block: a second table, or numbers of the header. Nobody should lose data in silence. */
const headerQuestion = (header: readonly Line[], layout: Layout): ReadingQuestion | undefined => {
  const rows = header.filter((line) => {
    // A quotation mark in prose is no fault.
    if (line.text.includes('"')) return false
    const fields = splitFields(line.text, layout.delimiter, line.number)
    return fields.length === layout.columns && fields.every(looksLikeNumber)
  })
  const [first] = rows
  if (first === undefined) return undefined
  return {
    field: 'headerLines',
    message: `Above the table, ${rows.length === 1 ? `line ${first.number} also holds` : `${rows.length} lines from line ${first.number} on also hold`} ${layout.columns} numbers. If they belong to a spectrum, mend the lines between them and the table.`,
    choices: [{ label: `Leave out lines 1 to ${header.length}`, change: { headerLines: header.length } }],
  }
}

/** "2048 2" above 2048 rows of 2 columns is a count, not a point. */
const countRow = (layout: Layout, rows: number): ReadingQuestion | undefined => {
  const [first] = layout.rows
  if (first === undefined || rows < 4 || Number(first.fields[layout.numeric[0] ?? 0]) !== rows - 1) return undefined
  return {
    field: 'headerLines',
    message: `Line ${first.line}, ${quote(first.fields.join(' '))}, begins with the number of rows that follow: it may be no point of the spectrum.`,
    choices: [
      { label: 'Leave it out', change: { headerLines: first.line } },
      { label: 'It is a point', change: { headerLines: first.line - 1 } },
    ],
  }
}

export const extentOf = (axis: Float64Array) =>
  axis.reduce((extent, position) => ({ min: Math.min(extent.min, position), max: Math.max(extent.max, position) }), {
    min: Infinity,
    max: -Infinity,
  })

export const present = <Value>(values: (Value | undefined)[]): Value[] => values.filter((value) => value !== undefined)

export interface Detection {
  reading: TableReading
  points: Points
  labels: Labels
  warnings: ReadingWarning[]
  questions: ReadingQuestion[]
}

/** Everything that follows from the file, given what a person has `decided` already. */
export const detectReading = (
  source: ByteSource,
  encoding: Encoding,
  lines: readonly Line[],
  decided: Partial<TableReading> = {},
): Detection => {
  const layout = findLayout(lines)
  const scan = scanBody(source, encoding, layout)
  const count = countRow(layout, scan.rows)
  if (count !== undefined) {
    layout.rows = layout.rows.slice(1)
    layout.firstLine = layout.rows[0]?.line ?? layout.firstLine
  }
  const header = lines.filter((line) => line.number < layout.firstLine)
  const { decimalMark, groupMark = 'none' } = decided
  const mark = decimalMark === undefined ? decideMarks(scan.evidence) : { marks: { decimalMark, groupMark } }
  const labels = findLabels(header, layout)
  const roles = findRoles(layout, labels, mark.marks)
  const draft: TableReading = {
    encoding,
    delimiter: layout.delimiter,
    ...mark.marks,
    headerLines: layout.firstLine - 1,
    footerLines: scan.footerLines,
    axisColumn: roles.axisColumn,
    valueColumn: roles.valueColumn,
    uncertaintyColumn: roles.uncertaintyColumn,
    axisUnit: 'meV',
    wavelengthMedium: 'vacuum',
    applyJacobian: false,
    skipIncomplete: false,
    ...decided,
  }
  // Unit, medium and factor, which are still open, change nothing about the rows as they are written.
  const points = readPoints(source, draft, { lenient: true })
  const extent = extentOf(points.axis)
  const axisLabel = labels.names[draft.axisColumn] ?? ''
  const valueLabel = `${labels.names[draft.valueColumn] ?? ''} ${labels.units[draft.valueColumn] ?? ''}`
  const unit =
    decided.axisUnit === undefined
      ? findAxisUnit(labels, header, draft.axisColumn, extent)
      : { value: decided.axisUnit }
  const jacobian = findJacobian(unit.value, valueLabel, header)
  const reading = {
    ...draft,
    axisUnit: unit.value,
    applyJacobian: jacobian.value,
    wavelengthMedium: findMedium(unit.value, axisLabel, header),
  }
  const footer = lines.find((line) => line.number > scan.lastRow && line.text.trim() !== '')
  return {
    reading,
    points,
    labels,
    questions: present([
      delimiterQuestion(layout),
      mark.question,
      count ?? headerQuestion(header, layout),
      ...roles.questions,
      unit.question,
      jacobian.question,
    ]),
    warnings: present([
      mark.warning,
      unit.warning,
      encoding === 'windows-1252'
        ? { code: 'encoding-legacy' as const, message: 'The text is no Unicode and was read as Windows-1252.' }
        : undefined,
      scan.footerLines > 0
        ? {
            code: 'footer-left-out' as const,
            message: `The last ${scan.footerLines} lines are text and left out${footer === undefined ? '' : `, beginning with ${quote(footer.text.trim())}`}.`,
          }
        : undefined,
      roles.ignored.length > 0
        ? {
            code: 'columns-ignored' as const,
            message: `${roles.ignored.length === 1 ? 'Column' : 'Columns'} ${roles.ignored
              .map((index) => index + 1)
              .slice(0, 12)
              .join(
                ', ',
              )}${roles.ignored.length > 12 ? ' and more' : ''} ${roles.ignored.length === 1 ? 'is' : 'are'} not used.`,
          }
        : undefined,
    ]),
  }
}
