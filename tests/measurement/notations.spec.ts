import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { proposeTable } from '../../shared/measurement/propose-table'
import { readTable } from '../../shared/measurement/read-table'
import { TableReadingSchema, type TableReading } from '../../shared/schemas/measurement'

/**
 * Any table in any notation: read right, or asked with the right answer on offer, never wrong in silence. The writer
 * below shares nothing with the reader.
 */

interface Notation {
  delimiter: TableReading['delimiter']
  decimalMark: TableReading['decimalMark']
  groupMark: TableReading['groupMark']
  header: string
  lineEnd: string
  minus: string
  blankBeforeNumber: boolean
}

const separators = { comma: ',', semicolon: ';', tab: '\t', blanks: '  ' } as const
const groups = { none: '', comma: ',', point: '.', blank: '\u202f', apostrophe: "'" } as const

const notations: fc.Arbitrary<Notation> = fc
  .record({
    delimiter: fc.constantFrom(...(Object.keys(separators) as Notation['delimiter'][])),
    decimalMark: fc.constantFrom<Notation['decimalMark']>('point', 'comma'),
    groupMark: fc.constantFrom(...(Object.keys(groups) as Notation['groupMark'][])),
    header: fc.constantFrom('', '# invented', 'Energy (meV);OD', 'a line of prose\n\n% another'),
    lineEnd: fc.constantFrom('\n', '\r\n', '\r'),
    minus: fc.constantFrom('-', '\u2212'),
    blankBeforeNumber: fc.boolean(),
  })
  .filter(({ decimalMark, groupMark }) => decimalMark !== groupMark)
  // Bare commas as delimiter and inside numbers cannot be told apart by anybody.
  .filter(
    ({ delimiter, decimalMark, groupMark }) =>
      delimiter !== 'comma' || (decimalMark === 'point' && groupMark !== 'comma'),
  )

const write = (value: number, digits: number, { decimalMark, groupMark, minus }: Notation): string => {
  const [whole = '', fraction] = Math.abs(value).toFixed(digits).split('.')
  let grouped = ''
  for (let index = 0; index < whole.length; index += 1) {
    if (index > 0 && (whole.length - index) % 3 === 0) grouped += groups[groupMark]
    grouped += whole[index]
  }
  const text = fraction === undefined ? grouped : `${grouped}${decimalMark === 'comma' ? ',' : '.'}${fraction}`
  return value < 0 && Number(value.toFixed(digits)) !== 0 ? `${minus}${text}` : text
}

const tables = fc.record({
  notation: notations,
  start: fc.integer({ min: 100, max: 20_000 }),
  step: fc.constantFrom(0.25, 1, 7, 0.125),
  axisDigits: fc.integer({ min: 0, max: 4 }),
  valueDigits: fc.integer({ min: 0, max: 6 }),
  values: fc.array(fc.double({ min: -3000, max: 2_000_000, noNaN: true }), { minLength: 4, maxLength: 12 }),
})

const seed = Number(process.env.FC_SEED ?? 20261201)

describe('tables in any notation', () => {
  it('are right or asked', () => {
    let silent = 0
    fc.assert(
      fc.property(tables, ({ notation, start, step, axisDigits, valueDigits, values }) => {
        const axis = values.map((_, index) => Number((start + index * step).toFixed(axisDigits)))
        fc.pre(new Set(axis).size >= 3)
        const lead = notation.blankBeforeNumber ? ' ' : ''
        const rows = values.map((value, index) =>
          [write(axis[index] ?? 0, axisDigits, notation), write(value, valueDigits, notation)]
            .map((cell) => lead + cell)
            .join(separators[notation.delimiter]),
        )
        const text = [...(notation.header === '' ? [] : notation.header.split('\n')), ...rows].join(notation.lineEnd)
        const bytes = new TextEncoder().encode(text)
        const proposal = proposeTable(bytes)
        const truth: Partial<TableReading> = {
          delimiter: notation.delimiter,
          decimalMark: notation.decimalMark,
          axisUnit: 'meV',
          axisColumn: 0,
          valueColumn: 1,
          applyJacobian: false,
        }
        let reading: TableReading = proposal.reading
        for (const question of proposal.needsAnswer) {
          const choice = question.choices.find(({ change }) =>
            Object.entries(change).every(
              ([key, value]) => !(key in truth) || truth[key as keyof TableReading] === value,
            ),
          )
          // Every question offers the truth.
          expect(choice, `${question.message}\n${text}`).toBeDefined()
          reading = { ...reading, ...choice?.change }
        }
        if (proposal.needsAnswer.every(({ field }) => field === 'axisUnit')) silent += 1
        const confirmed = TableReadingSchema.parse(reading)
        const spectrum = readTable(bytes, confirmed)
        const expected = new Map<number, number[]>()
        axis.forEach((position, index) => {
          const value = Number((values[index] ?? 0).toFixed(valueDigits))
          expected.set(position, [...(expected.get(position) ?? []), value])
        })
        const energies = [...expected.keys()].sort((a, b) => a - b)
        expect([...spectrum.energiesMeV], text).toEqual(energies)
        energies.forEach((energy, index) => {
          const all = expected.get(energy) ?? []
          const mean = all.reduce((sum, value) => sum + value, 0) / all.length
          expect(spectrum.values[index], text).toBeCloseTo(mean, 8)
        })
      }),
      { numRuns: 1500, seed },
    )
    // Asking about everything would be right as well, and useless: most tables speak for themselves.
    expect(silent).toBeGreaterThan(900)
  })
})
