import type { ReadingQuestion } from '../schemas/measurement'
import { isBlank, splitFields, withoutCommentMark, type Delimiter } from './fields'
import type { Layout } from './layout'
import { readCell, type Marks } from './number-text'
import type { Line } from './text-lines'
import { unitsIn } from './units'

/** Names and units of the columns, as far as the header has them. */
export interface Labels {
  names: string[]
  /** Cells of a units row, or empty. */
  units: string[]
}

const hasLetters = (text: string) => /\p{L}/u.test(text)

/** "Energy (meV)  Counts (1/s)": a bracket belongs to the label before it. */
const joinBrackets = (fields: string[]): string[] => {
  const joined: string[] = []
  for (const field of fields) {
    const last = joined.at(-1)
    const open = last !== undefined && /[([{][^)\]}]*$/.test(last)
    if (last !== undefined && (open || /^(?:[([{]|\/$|\/[A-Za-z])/.test(field) || /\/$/.test(last)))
      joined[joined.length - 1] = `${last} ${field}`
    else joined.push(field)
  }
  return joined
}

/** The ways in which a header line may be split into as many labels as the table has columns. */
const labelSplits = (text: string, delimiter: Delimiter, line: number): string[][] => {
  const own = splitFields(text, delimiter, line)
  const splits = [own]
  if (delimiter === 'blanks') {
    const wide = text.trim().split(/\t+| {2,}/)
    splits.unshift(wide)
    splits.push(joinBrackets(own))
    for (const other of ['tab', 'semicolon', 'comma'] as const) splits.push(splitFields(text, other, line))
  }
  return splits
}

const labelsIn = (line: Line, delimiter: Delimiter, columns: number): string[] | undefined => {
  const text = withoutCommentMark(line.text).slice(0, 20_000)
  if (isBlank(text)) return undefined
  try {
    return labelSplits(text, delimiter, line.number).find(
      (fields) =>
        (fields.length === columns ||
          (fields.length > columns && fields.slice(columns).every((field) => field === ''))) &&
        fields.some(hasLetters),
    )
  } catch {
    return undefined
  }
}

const bareUnit =
  /^[([{]?\s*(?:[a-zA-Zµμ°Å%./ ]{1,12}|[a-zA-Z]{1,3}\s?(?:\^|\*\*)?[-\u2212\u207b]?[0-9\u00b9])\s*[)\]}]?$/

const isUnitsRow = (fields: string[]): boolean =>
  fields.every((field) => field === '' || bareUnit.test(field) || unitsIn(field).length > 0) &&
  fields.some((field) => unitsIn(field).length > 0) &&
  fields.every((field) => field.length <= 16)

/** Labels from the header lines above the numbers; a units row below the names is recognised. */
export const findLabels = (header: readonly Line[], layout: Pick<Layout, 'delimiter' | 'columns'>): Labels => {
  const candidates: { fields: string[]; line: number }[] = []
  for (const line of [...header].reverse()) {
    if (isBlank(line.text)) continue
    const fields = labelsIn(line, layout.delimiter, layout.columns)
    if (fields !== undefined) candidates.push({ fields: fields.slice(0, layout.columns), line: line.number })
    if (candidates.length === 2) break
  }
  const [last, before] = candidates
  const empty = Array.from({ length: layout.columns }, () => '')
  if (last === undefined) return { names: empty, units: empty }
  if (before !== undefined && last.line - before.line <= 2 && isUnitsRow(last.fields) && !isUnitsRow(before.fields))
    return { names: before.fields, units: last.fields }
  // A first line of names with a second one of remarks: the remarks are kept apart only if they are units.
  return { names: last.fields, units: empty }
}

/** Column headings that are numbers with letters ("4 K") name a series of values, not an axis. */
const axisWords =
  /energ|wave\s?-?_?length|wave\s?-?_?number|wellenl|lambda|λ|photon|h\s?ν|hν|abscissa|longueur d.onde|(?<![a-z])(?:e|x|wl|wn)(?![a-z])/i
const uncertaintyWords =
  /uncert|unsicher|(?<![a-z])err|sigma|σ|std|stdev|stderr|(?<![a-z])(?:sd|se|sem|unc|dev|d?y_?err)(?![a-z])|±|δ|delta/i
const indexWords = /^(?:#|no\.?|nr\.?|n|i|index|idx|point|row|pixel|px|channel)$/i

export type Role = 'axis' | 'value' | 'uncertainty' | 'index' | 'unknown'

const columnNumbers = (layout: Layout, index: number, marks: Marks): number[] =>
  layout.rows.slice(0, 2000).map((row) => {
    const cell = readCell(row.fields[index] ?? '', marks)
    return cell.kind === 'number' ? cell.value : NaN
  })

const isCounting = (numbers: number[]): boolean =>
  numbers.length >= 3 &&
  (numbers[0] === 0 || numbers[0] === 1) &&
  numbers.every((value, index) => value === (numbers[0] ?? 0) + index)

const isMonotonic = (numbers: number[]): boolean => {
  const rises = numbers.every((value, index) => index === 0 || !(value <= (numbers[index - 1] ?? NaN)))
  const falls = numbers.every((value, index) => index === 0 || !(value >= (numbers[index - 1] ?? NaN)))
  return rises || falls
}

const roleOf = (label: string): Role => {
  if (label === '') return 'unknown'
  if (indexWords.test(label.trim())) return 'index'
  if (uncertaintyWords.test(label)) return 'uncertainty'
  if (axisWords.test(label)) return 'axis'
  return unitsIn(label).length > 0 ? 'axis' : 'value'
}

export interface ColumnRoles {
  axisColumn: number
  valueColumn: number
  uncertaintyColumn: number | null
  questions: ReadingQuestion[]
  /** Columns that nobody asked for. */
  ignored: number[]
}

const nameOf = (labels: Labels, index: number): string => {
  const name = [labels.names[index], labels.units[index]].filter(Boolean).join(' ')
  return name === '' ? `column ${index + 1}` : `column ${index + 1}, "${name.slice(0, 40)}"`
}

/** Which column is axis, value and uncertainty: by their labels, else by order and monotony, else asked. */
export const findRoles = (layout: Layout, labels: Labels, marks: Marks): ColumnRoles => {
  const roles = new Map(
    layout.numeric.map((index) => [index, roleOf(`${labels.names[index] ?? ''} ${labels.units[index] ?? ''}`.trim())]),
  )
  const first = layout.numeric[0] ?? 0
  const otherAxis = [...roles].some(([index, role]) => index !== first && role === 'axis')
  const counts = layout.numeric.length >= 3 && isCounting(columnNumbers(layout, first, marks))
  /** 1, 2, 3, … without a label: row numbers, most likely, but a person has to say so. */
  const onlyCounts = counts && roles.get(first) === 'unknown' && !otherAxis
  if (onlyCounts || (counts && otherAxis && roles.get(first) !== 'axis')) roles.set(first, 'index')
  const withRole = (role: Role) => layout.numeric.filter((index) => roles.get(index) === role)
  const questions: ReadingQuestion[] = []
  const choose = (
    field: 'axisColumn' | 'valueColumn',
    message: string,
    from: number[],
    change: (index: number) => ReadingQuestion['choices'][number]['change'],
  ) =>
    questions.push({
      field,
      message,
      choices: from.map((index) => ({ label: nameOf(labels, index), change: change(index) })),
    })

  const usable = layout.numeric.filter((index) => roles.get(index) !== 'index')
  const columns = usable.length >= 2 ? usable : layout.numeric
  const named = withRole('axis')
  const monotonic = columns.filter(
    (index) => roles.get(index) !== 'uncertainty' && isMonotonic(columnNumbers(layout, index, marks)),
  )
  const axisColumn = named[0] ?? monotonic[0] ?? columns[0] ?? 0
  const values = columns.filter((index) => index !== axisColumn && roles.get(index) === 'value')
  const unknown = columns.filter((index) => index !== axisColumn && roles.get(index) === 'unknown')
  const otherAxes = named.filter((index) => index !== axisColumn)
  const valueColumn = values[0] ?? unknown[0] ?? otherAxes[0] ?? columns.find((index) => index !== axisColumn) ?? 1
  const candidates = [...values, ...unknown].sort((a, b) => a - b)

  const uncertainties = withRole('uncertainty').filter((index) => index !== axisColumn)
  // The uncertainty of a value stands behind it, before the next value; a single one belongs to every value.
  const uncertaintyOf = (value: number): number | null => {
    const free = uncertainties.filter((index) => index !== value)
    if (free.length === 1) return free[0] ?? null
    const next = candidates.find((index) => index > value) ?? Infinity
    return free.find((index) => index > value && index < next) ?? null
  }
  const uncertaintyColumn = uncertaintyOf(valueColumn)

  // The column that becomes the axis cannot stay the value or the uncertainty.
  const asAxis = (index: number) => ({
    axisColumn: index,
    ...(index === valueColumn ? { valueColumn: axisColumn } : {}),
    ...(index === uncertaintyColumn ? { uncertaintyColumn: null } : {}),
  })
  if (onlyCounts)
    choose('axisColumn', 'The first column only counts the rows.', [axisColumn, first], (index) =>
      index === first ? { axisColumn: first, valueColumn: columns[0], uncertaintyColumn: null } : { axisColumn: index },
    )
  else if (named.length > 1) choose('axisColumn', 'Several columns can be the axis.', named, asAxis)
  else if (named.length === 0 && axisColumn !== columns[0])
    choose(
      'axisColumn',
      'The first column does not rise or fall steadily, so another may be the axis.',
      columns,
      asAxis,
    )
  if (values.length === 0 && unknown.length === 2 && uncertaintyColumn === null && columns.length === 3) {
    const [value = 1, other = 2] = unknown
    questions.push({
      field: 'uncertaintyColumn',
      message: `Nothing in the file says whether ${nameOf(labels, other)} is the uncertainty of ${nameOf(labels, value)}.`,
      choices: [
        { label: `uncertainty of column ${value + 1}`, change: { valueColumn: value, uncertaintyColumn: other } },
        { label: `not used`, change: { valueColumn: value, uncertaintyColumn: null } },
        { label: `column ${other + 1} holds the values`, change: { valueColumn: other, uncertaintyColumn: null } },
      ],
    })
  } else if (candidates.length > 1)
    choose('valueColumn', 'Several columns can be the measured values.', candidates, (index) => ({
      valueColumn: index,
      uncertaintyColumn: uncertaintyOf(index),
    }))

  const used = new Set([axisColumn, valueColumn, uncertaintyColumn])
  const ignored = Array.from({ length: layout.columns }, (_, index) => index).filter((index) => !used.has(index))
  return { axisColumn, valueColumn, uncertaintyColumn, questions, ignored }
}
