import type { ReadingQuestion, ReadingWarning, TableProposal, TableReading } from '../schemas/measurement'
import { toSource, type ByteSource } from './byte-source'
import { findLabels, findRoles, type Labels } from './columns'
import { splitFields } from './fields'
import { delimiterQuestion, findLayout, layoutLines, type Layout } from './layout'
import { decideMarks } from './marks'
import { shapeOf } from './number-text'
import { findAxisUnit, findJacobian, findMedium } from './questions'
import { readPoints, type Points } from './read-points'
import { scanBody } from './scan-body'
import { detectEncoding, readLines, type Encoding, type Line } from './text-lines'
import { thin } from './thin'
import { toSpectrum } from './to-spectrum'
import { unitsIn } from './units'
import { quote } from './unreadable'
import { warningsOf } from './warnings'

const headLines = 40
const headWidth = 200
const previewPoints = 2000

const linesUntil = (source: ByteSource, encoding: Encoding, count: number): Line[] => {
  const lines: Line[] = []
  for (const line of readLines(source, encoding)) {
    lines.push(line)
    if (lines.length === count) break
  }
  return lines
}

/** Rows of numbers above the block: a second table, or numbers of the header. Nobody should lose data in silence. */
const headerQuestion = (header: readonly Line[], layout: Layout): ReadingQuestion | undefined => {
  const rows = header.filter((line) => {
    const fields = splitFields(line.text, layout.delimiter, line.number)
    return fields.length === layout.columns && fields.every((field) => shapeOf(field) !== undefined)
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

const extentOf = (axis: Float64Array) =>
  axis.reduce((extent, position) => ({ min: Math.min(extent.min, position), max: Math.max(extent.max, position) }), {
    min: Infinity,
    max: -Infinity,
  })

const describeColumns = (points: Points, labels: Labels): TableProposal['columns'] => {
  const width = Math.max(labels.names.length, ...points.sample.map((row) => row.length))
  return Array.from({ length: width }, (_, index) => {
    const name = (labels.names[index] ?? '').slice(0, headWidth)
    const unit = (labels.units[index] ?? '').replace(/^[([{]|[)\]}]$/g, '') || (unitsIn(name)[0]?.text ?? '')
    return { index, name, unit: unit.slice(0, headWidth), sample: points.sample.map((row) => row[index] ?? '') }
  })
}

const missingQuestion = (points: Points): ReadingQuestion | undefined => {
  const [first] = points.missing.first
  if (first === undefined) return undefined
  const found = first.found === '' ? 'a blank cell' : quote(first.found)
  return {
    field: 'skipIncomplete',
    message: `${points.missing.count} of the rows have no number in a column that is used, first line ${first.line}, column ${first.column}: ${found}.`,
    choices: [{ label: 'Leave these rows out', change: { skipIncomplete: true } }],
  }
}

/** Shows a reading at work: points, preview, warnings. Incomplete rows are left out of the preview. */
const show = (source: ByteSource, reading: TableReading, labels: Labels) => {
  const points = readPoints(source, reading, { lenient: true })
  const spectrum = toSpectrum(points, reading)
  const kept = thin(spectrum.values, previewPoints)
  const extent = extentOf(points.axis)
  return {
    points,
    columns: describeColumns(points, labels),
    rows: points.axis.length,
    preview: {
      energiesMeV: kept.map((index) => spectrum.energiesMeV[index] ?? 0),
      values: kept.map((index) => spectrum.values[index] ?? 0),
    },
    range: {
      axisMin: extent.min,
      axisMax: extent.max,
      energyMinMeV: spectrum.energiesMeV[0] ?? 0,
      energyMaxMeV: spectrum.energiesMeV.at(-1) ?? 0,
    },
    warnings: warningsOf(points, spectrum, reading),
  }
}

const present = <Value>(values: (Value | undefined)[]): Value[] => values.filter((value) => value !== undefined)

interface Detection {
  reading: TableReading
  labels: Labels
  warnings: ReadingWarning[]
  questions: ReadingQuestion[]
}

/** Everything that follows from the file, given what a person has `decided` already. */
const detect = (
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
  const extent = extentOf(readPoints(source, draft, { lenient: true }).axis)
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

const headOf = (lines: readonly Line[]) => lines.slice(0, headLines).map((line) => line.text.slice(0, headWidth))

/**
 * Proposes how a delimited text file is to be read. What the file leaves open is in `needsAnswer`; until a person has
 * decided it, the reading holds a first guess that serves the preview only.
 *
 * @throws AppError `measurement/unreadable` naming line, column, what was found and what is expected
 */
export const proposeTable = (input: Uint8Array | ByteSource): TableProposal => {
  const source = toSource(input)
  const encoding = detectEncoding(source)
  const lines = linesUntil(source, encoding, layoutLines)
  const { reading, labels, warnings, questions } = detect(source, encoding, lines)
  const { points, ...shown } = show(source, reading, labels)
  return {
    reading,
    head: headOf(lines),
    ...shown,
    warnings: [...warnings, ...shown.warnings],
    needsAnswer: present([...questions, missingQuestion(points)]),
  }
}

/**
 * The proposal again, under a reading that a person corrected. Fields named in `answered` are decided; questions about
 * the others stay.
 */
export const proposeWith = (
  input: Uint8Array | ByteSource,
  reading: TableReading,
  answered: readonly (keyof TableReading)[],
): TableProposal => {
  const source = toSource(input)
  const lines = linesUntil(source, reading.encoding, layoutLines)
  const header = lines.slice(0, reading.headerLines)
  const rows = lines.slice(reading.headerLines, reading.headerLines + 1)
  const columns = rows[0] === undefined ? 0 : splitFields(rows[0].text, reading.delimiter, rows[0].number).length
  const labels = findLabels(header, { delimiter: reading.delimiter, columns })
  const { points, ...shown } = show(source, reading, labels)
  const questions: ReadingQuestion[] = []
  try {
    const decided = Object.fromEntries(answered.map((field) => [field, reading[field]]))
    if (decided.decimalMark !== undefined) decided.groupMark = reading.groupMark
    questions.push(...detect(source, reading.encoding, lines, decided).questions)
  } catch {
    // The file has no layout that the reader finds by itself; the person has given one that works.
  }
  if (!reading.skipIncomplete) questions.push(...present([missingQuestion(points)]))
  return {
    reading,
    head: headOf(lines),
    ...shown,
    needsAnswer: questions.filter((question) => !answered.includes(question.field)),
  }
}
