import type { ReadingQuestion, TableProposal, TableReading } from '../schemas/measurement'
import { toSource, type ByteSource } from './byte-source'
import { findLabels, type Labels } from './columns'
import { detectReading, extentOf, present } from './detect-reading'
import { splitFields } from './fields'
import { layoutLines } from './layout'
import { readPoints, type Points } from './read-points'
import { detectEncoding, readLines, WrongEncodingError, type Encoding, type Line } from './text-lines'
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

/** Shows a reading at work: preview, range, warnings. Incomplete rows are left out of the preview. */
const show = (points: Points, reading: TableReading, labels: Labels) => {
  const spectrum = toSpectrum(points, reading)
  const kept = thin(spectrum.values, previewPoints)
  const extent = extentOf(points.axis)
  return {
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

const headOf = (lines: readonly Line[]) => lines.slice(0, headLines).map((line) => line.text.slice(0, headWidth))

const proposeIn = (source: ByteSource, encoding: Encoding): TableProposal => {
  const lines = linesUntil(source, encoding, layoutLines)
  const { reading, points, labels, warnings, questions } = detectReading(source, encoding, lines)
  const shown = show(points, reading, labels)
  return {
    reading,
    head: headOf(lines),
    ...shown,
    warnings: [...warnings, ...shown.warnings],
    needsAnswer: present([...questions, missingQuestion(points)]),
  }
}

/**
 * Proposes how a delimited text file is to be read. What the file leaves open is in `needsAnswer`; until a person has
 * decided it, the reading holds a first guess that serves the preview only.
 *
 * @throws AppError `measurement/unreadable` naming line, column, what was found and what is expected
 */
export const proposeTable = (input: Uint8Array | ByteSource): TableProposal => {
  const source = toSource(input)
  const encoding = detectEncoding(source)
  try {
    return proposeIn(source, encoding)
  } catch (error) {
    if (encoding !== 'utf-8' || !(error instanceof WrongEncodingError)) throw error
    return proposeIn(source, 'windows-1252')
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
  const points = readPoints(source, reading, { lenient: true })
  const shown = show(points, reading, labels)
  const questions: ReadingQuestion[] = []
  try {
    const decided = Object.fromEntries(answered.map((field) => [field, reading[field]]))
    if (decided.decimalMark !== undefined) decided.groupMark = reading.groupMark
    questions.push(...detectReading(source, reading.encoding, lines, decided).questions)
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
