/**
 * Comma-separated values after RFC 4180: CRLF line ends, cells quoted where they must be, quotes doubled. A text cell
 * that a spreadsheet would take for a formula gets an apostrophe in front (CWE-1236); numbers are written in their
 * shortest form that reads back to the same double, so a negative number stays a number.
 */
export type CsvCell = string | number | null

export interface CsvColumn {
  /** Name with the unit in parentheses. */
  name: string
  values: ArrayLike<CsvCell>
}

// eslint-disable-next-line no-control-regex -- NUL, TAB and CR start a formula in some spreadsheets
const formulaStart = /^[=+\-@\t\r\u0000]/

export const neutralize = (text: string): string => (formulaStart.test(text) ? `'${text}` : text)

export const toCsvCell = (cell: CsvCell | undefined): string => {
  if (cell === null || cell === undefined) return ''
  if (typeof cell === 'number') return Number.isFinite(cell) ? (Object.is(cell, -0) ? '0' : String(cell)) : ''
  const text = neutralize(cell)
  return /[",\r\n]/.test(text) || text !== text.trim() ? `"${text.replace(/"/g, '""')}"` : text
}

/** One line of names, then one line per index up to the longest column; short columns leave their cells empty. */
export const toCsv = (columns: readonly CsvColumn[]): string => {
  const rows = columns.reduce((most, column) => Math.max(most, column.values.length), 0)
  const lines = [columns.map((column) => toCsvCell(column.name)).join(',')]
  for (let row = 0; row < rows; row++) lines.push(columns.map((column) => toCsvCell(column.values[row])).join(','))
  return `${lines.join('\r\n')}\r\n`
}
