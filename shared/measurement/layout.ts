import type { ReadingQuestion } from '../schemas/measurement'
import { limits } from '../utils/limits'
import { delimiterCharacters, isBlank, isComment, splitFields, type Delimiter } from './fields'
import { isMissing, looksLikeNumber } from './number-text'
import type { Line } from './text-lines'
import { quote, unreadable } from './unreadable'

/** Lines that are looked at to find the layout; a header longer than this is refused. */
export const layoutLines = 5000

/** A run of consecutive rows with the same number of columns, under one delimiter. */
export interface Layout {
  delimiter: Delimiter
  /** Line of the first row of numbers, from 1. */
  firstLine: number
  lastLine: number
  columns: number
  rows: Row[]
  /** Indices of the columns that hold numbers. */
  numeric: number[]
}

export interface Row {
  line: number
  fields: string[]
}

/** Blanks may group the thousands within a cell, but in a file of bare commas they only pad: "1,5 234,5" is no cell. */
const isNumberLike = (field: string, delimiter: Delimiter): boolean =>
  looksLikeNumber(field) && !(delimiter === 'comma' && /[0-9][ \t]+[0-9]/.test(field))

const isCellLike = (field: string, delimiter: Delimiter): boolean => isNumberLike(field, delimiter) || isMissing(field)

/** Numbers in the digits of another script still make a row, so that the refusal can name them. */
export const isForeignNumber = (field: string): boolean =>
  /(?![0-9])\p{Nd}/u.test(field) && /^[\p{Nd}\p{P}\p{S}\p{Z}]+$/u.test(field)

const rowOf = (line: Line, delimiter: Delimiter): Row | undefined => {
  const fields = splitFields(line.text, delimiter, line.number)
  const numbers = fields.filter((field) => isNumberLike(field, delimiter) || isForeignNumber(field))
  const like = numbers.length + fields.filter((field) => isMissing(field)).length
  const isRow = fields.length >= 2 && numbers.length >= 1 && like >= 2 && like * 2 >= fields.length
  return isRow ? { line: line.number, fields } : undefined
}

/** One line as a row under a delimiter; undefined where it is none. */
const tryRow = (line: Line, delimiter: Delimiter): Row | undefined => {
  try {
    return rowOf(line, delimiter)
  } catch {
    // A stray quotation mark under a delimiter that is only being tried; the reading pass reports it.
    return undefined
  }
}

interface Run {
  rows: Row[]
  /** The line between this run and the one before, where it is a single one that holds a number: a spoilt row. */
  spoiltBefore: boolean
}

const holdsNumber = (line: Line, delimiter: Delimiter): boolean => {
  try {
    return splitFields(line.text, delimiter, line.number).some((field) => isNumberLike(field, delimiter))
  } catch {
    return true
  }
}

const runsOf = (lines: readonly Line[], delimiter: Delimiter): Run[] => {
  const runs: Run[] = []
  let between: Line[] = []
  let open = false
  for (const line of lines) {
    if (isBlank(line.text) || isComment(line.text, delimiter)) continue
    const row = tryRow(line, delimiter)
    if (row === undefined) {
      between.push(line)
      open = false
      continue
    }
    const run = runs.at(-1)
    if (open && run !== undefined && row.fields.length === run.rows[0]?.fields.length) run.rows.push(row)
    else {
      const [spoilt, ...more] = between
      runs.push({
        rows: [row],
        spoiltBefore: spoilt !== undefined && more.length === 0 && holdsNumber(spoilt, delimiter),
      })
    }
    between = []
    open = true
  }
  return runs
}

/** Rows in front of a spoilt one that make it a row of the table and not a line of the header. */
const rowsBeforeSpoilt = 3

/**
 * The longest run of rows, from its true beginning: where a single spoilt line, or a single row of another width, cuts
 * a table in two, the table begins above it, so that the reading pass can name the line instead of taking the upper
 * part for a header.
 */
const longestRun = (lines: readonly Line[], delimiter: Delimiter): Row[] => {
  const runs = runsOf(lines, delimiter)
  let best = 0
  runs.forEach(({ rows }, index) => {
    if (rows.length > (runs[best]?.rows.length ?? 0)) best = index
  })
  const width = (index: number) => runs[index]?.rows[0]?.fields.length
  for (let above = best - 1; above >= Math.max(0, best - 2); above -= 1) {
    const upper = runs[above]
    const isCut = above === best - 1 ? runs[best]?.spoiltBefore : runs[best - 1]?.rows.length === 1
    if (upper !== undefined && upper.rows.length >= rowsBeforeSpoilt && width(above) === width(best) && isCut)
      return upper.rows
  }
  return runs[best]?.rows ?? []
}

/** A layout from a run of rows: columns that are empty throughout at the end are no columns, header rows go. */
const layoutOf = (run: Row[], delimiter: Delimiter): Layout | undefined => {
  let columns = run[0]?.fields.length ?? 0
  while (columns > 0 && run.every((row) => row.fields[columns - 1] === '')) columns -= 1
  const numeric = Array.from({ length: columns }, (_, index) => index).filter((index) => {
    const like = run.filter((row) => {
      const field = row.fields[index] ?? ''
      return isCellLike(field, delimiter) || isForeignNumber(field)
    })
    const real = run.some((row) => {
      const field = row.fields[index] ?? ''
      return isNumberLike(field, delimiter) || isForeignNumber(field)
    })
    return real && like.length >= 0.8 * run.length
  })
  if (numeric.length < 2) return undefined
  const fits = (row: Row | undefined) =>
    row !== undefined &&
    numeric.every((index) => isCellLike(row.fields[index] ?? '', delimiter) || isForeignNumber(row.fields[index] ?? ''))
  let first = 0
  let last = run.length - 1
  while (first <= last && !fits(run[first])) first += 1
  while (last >= first && !fits(run[last])) last -= 1
  const rows = run.slice(first, last + 1)
  const firstLine = rows[0]?.line
  const lastLine = rows.at(-1)?.line
  if (firstLine === undefined || lastLine === undefined) return undefined
  return { delimiter, firstLine, lastLine, columns, rows, numeric }
}

const occurs = (lines: readonly Line[], delimiter: Delimiter): boolean =>
  delimiter === 'blanks' || lines.some((line) => line.text.includes(delimiterCharacters[delimiter]))

const onlyOneColumn = (lines: readonly Line[]): Line | undefined => {
  const numbers = lines.filter((line) => looksLikeNumber(line.text))
  return numbers.length >= 2 ? numbers[0] : undefined
}

/** Rows count, columns of text against it: "1,84   0,02" split at its commas leaves "84   0" in the middle. */
const weightOf = ({ rows, numeric, columns }: Layout): number => (rows.length * numeric.length) / columns

/**
 * Delimiter and block of numbers of a table. Every delimiter is tried; the one with the longest block of pure numbers wins, and among
 * equals the more telling one (tab and semicolon are never part of a number, a comma or a blank may be).
 */
export const findLayout = (lines: readonly Line[]): Layout => {
  const order: Delimiter[] = ['tab', 'semicolon', 'comma', 'blanks']
  let best: Layout | undefined
  for (const delimiter of order) {
    if (!occurs(lines, delimiter)) continue
    const layout = layoutOf(longestRun(lines, delimiter), delimiter)
    if (layout !== undefined && (best === undefined || weightOf(layout) > weightOf(best))) best = layout
  }
  if (best !== undefined) {
    if (best.columns > limits.tableColumns)
      throw unreadable({ line: best.firstLine }, `${best.columns} columns`, `at most ${limits.tableColumns}`)
    return best
  }
  const single = onlyOneColumn(lines)
  if (single !== undefined)
    throw unreadable(
      { line: single.number },
      `one number, ${quote(single.text.trim())}`,
      'at least an axis and a value, separated by comma, semicolon, tab or blanks',
    )
  const first = lines.find((line) => !isBlank(line.text))
  // Too many columns say more than that there are no rows.
  if (first !== undefined && !first.text.includes('"'))
    for (const delimiter of order) splitFields(first.text, delimiter, first.number)
  throw unreadable(
    first === undefined ? {} : { line: first.number },
    first === undefined ? 'only blank lines' : `no rows of numbers, beginning with ${quote(first.text.trim())}`,
    'at least two rows of numbers separated by comma, semicolon, tab or blanks',
  )
}

const isWhole = (field: string) => /^[+-]?[0-9]+$/.test(field)
/** What stands before and behind a thousands mark that was taken for a delimiter. */
const isGroupHead = (field: string) => /^[+-]?[1-9][0-9]{0,2}$/.test(field)
const isGroupTail = (field: string) => /^[0-9]{3}(?:[.,][0-9]+)?$/.test(field)

/**
 * Whether the mark that separates the columns may also be a part of the numbers: "1,5,2,5" and "1 850.5 0.3" can be
 * read in two ways, and only the person knows which is meant.
 */
export const delimiterQuestion = ({ delimiter, rows, columns }: Layout): ReadingQuestion | undefined => {
  if ((delimiter !== 'comma' && delimiter !== 'blanks') || columns < 3) return undefined
  const first = rows[0]
  if (first === undefined) return undefined
  const every = (test: (fields: string[]) => boolean) => rows.every((row) => test(row.fields.slice(0, columns)))
  const asWritten = first.fields.slice(0, columns).join(delimiter === 'comma' ? ',' : ' ')
  const question = (what: string): ReadingQuestion => ({
    field: 'delimiter',
    message: `Line ${first.line} has ${quote(asWritten)}: ${what} If so, save the file with semicolons or tabs between the columns and upload it again.`,
    choices: [{ label: `${columns} separate columns`, change: { delimiter } }],
  })
  const quoted = rows.some((row) => row.fields.some((field) => field.includes(',')))
  if (delimiter === 'comma' && !quoted && every((fields) => fields.every(isWhole)))
    return question('every number is whole, so the commas may be decimal marks as well as delimiters.')
  for (let index = 0; index + 1 < columns; index += 1) {
    if (every((fields) => isGroupHead(fields[index] ?? '') && isGroupTail(fields[index + 1] ?? '')))
      return question(
        `the ${delimiter === 'comma' ? 'comma' : 'blank'} between columns ${index + 1} and ${index + 2} may group the thousands of one number.`,
      )
  }
  return undefined
}
