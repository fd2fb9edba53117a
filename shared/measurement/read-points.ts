import type { TableReading } from '../schemas/measurement'
import { limits } from '../utils/limits'
import type { ByteSource } from './byte-source'
import { isBlank, isComment, splitFields } from './fields'
import { hasUnusualSign, readCell } from './number-text'
import { readLines, type Line } from './text-lines'
import { quote, unreadable } from './unreadable'

/** The rows of a table in the order of the file, still in the unit of its axis. */
export interface Points {
  axis: Float64Array
  values: Float64Array
  uncertainties: Float64Array | null
  /** Line of each point. */
  lines: Int32Array
  /** Rows left out because a cell was blank or no number. */
  missing: { count: number; first: { line: number; column: number; found: string }[] }
  /** Numbers with a minus sign that is no ASCII hyphen. */
  unusualSigns: number
  /** The first rows as text, for a look at the columns. */
  sample: string[][]
}

export interface PointsOptions {
  /** Leave out incomplete rows whatever the reading says, for a preview. */
  lenient?: boolean
}

const sampleRows = 5

/** Growing list of doubles without boxing. */
class Doubles {
  #data = new Float64Array(1024)
  length = 0
  push(value: number) {
    if (this.length === this.#data.length) {
      const larger = new Float64Array(2 * this.#data.length)
      larger.set(this.#data)
      this.#data = larger
    }
    this.#data[this.length] = value
    this.length += 1
  }
  toArray(): Float64Array {
    return this.#data.slice(0, this.length)
  }
}

/** Lines of the table's body: behind the header, before the footer, without remarks and blank lines. */
export function* bodyLines(source: ByteSource, reading: TableReading): Generator<Line> {
  const held: Line[] = []
  for (const line of readLines(source, reading.encoding)) {
    if (line.number <= reading.headerLines) continue
    held.push(line)
    if (held.length <= reading.footerLines) continue
    const next = held.shift()
    if (next !== undefined && !isBlank(next.text) && !isComment(next.text, reading.delimiter)) yield next
  }
}

/** Axis, value and uncertainty of every row, or a refusal that names line and column. */
export const readPoints = (source: ByteSource, reading: TableReading, options: PointsOptions = {}): Points => {
  const columns = [reading.axisColumn, reading.valueColumn]
  if (reading.uncertaintyColumn !== null) columns.push(reading.uncertaintyColumn)
  const lists = columns.map(() => new Doubles())
  const lines = new Doubles()
  const missing: Points['missing'] = { count: 0, first: [] }
  const sample: string[][] = []
  let unusualSigns = 0
  let width: number | undefined
  let firstFilled = 0

  for (const { number: line, text } of bodyLines(source, reading)) {
    const fields = splitFields(text, reading.delimiter, line)
    const filled = fields.findLastIndex((field) => field !== '') + 1
    if (width === undefined) {
      width = fields.length
      firstFilled = filled
    }
    // Rows may differ in empty fields at the end only.
    if (fields.length < firstFilled || filled > width)
      throw unreadable(
        { line },
        `${filled} ${filled === 1 ? 'field' : 'fields'} in ${quote(text.trim())}`,
        `${width} columns as in the rows before`,
      )
    if (Math.max(...columns) >= fields.length)
      throw unreadable(
        { line },
        fields.length === 1 ? '1 column' : `${fields.length} columns`,
        `at least ${Math.max(...columns) + 1}, as the reading asks`,
      )
    if (sample.length < sampleRows) sample.push(fields.slice(0, limits.tableColumns).map((field) => field.slice(0, 40)))

    const row: number[] = []
    let incomplete = false
    for (const column of columns) {
      const field = fields[column] ?? ''
      const cell = readCell(field, reading)
      if (cell.kind === 'bad') throw unreadable({ line, column: column + 1 }, quote(field), cell.reason)
      if (cell.kind === 'missing') {
        if (!reading.skipIncomplete && !options.lenient)
          throw unreadable(
            { line, column: column + 1 },
            field === '' ? 'a blank cell' : quote(field),
            'a number, or the choice to leave out incomplete rows',
          )
        incomplete = true
        if (missing.first.length < 3) missing.first.push({ line, column: column + 1, found: field })
        break
      }
      if (hasUnusualSign(field)) unusualSigns += 1
      row.push(cell.value)
    }
    if (incomplete) {
      missing.count += 1
      continue
    }
    row.forEach((value, index) => lists[index]?.push(value))
    lines.push(line)
    if (lines.length > limits.measurementPoints)
      throw unreadable({ line }, `more than ${limits.measurementPoints} rows`, `at most ${limits.measurementPoints}`)
  }

  return {
    axis: lists[0]?.toArray() ?? new Float64Array(),
    values: lists[1]?.toArray() ?? new Float64Array(),
    uncertainties: lists[2]?.toArray() ?? null,
    lines: Int32Array.from(lines.toArray()),
    missing,
    unusualSigns,
    sample,
  }
}
