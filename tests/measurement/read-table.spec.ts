import { describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors/app-error'
import { proposeTable, proposeWith } from '../../shared/measurement/propose-table'
import { readTable } from '../../shared/measurement/read-table'
import { airRefractivity, toVacuumNm } from '../../shared/measurement/units'
import type { TableReading } from '../../shared/schemas/measurement'

/** h c in meV nm from the exact SI of 2019: 6.62607015e-34 x 299792458 / 1.602176634e-19, times 1e12. */
const hcMeVNm = 1_239_841.984332
const encode = (text: string) => new TextEncoder().encode(text)

const reading = (changes: Partial<TableReading> = {}): TableReading => ({
  encoding: 'utf-8',
  delimiter: 'semicolon',
  decimalMark: 'point',
  groupMark: 'none',
  headerLines: 0,
  footerLines: 0,
  axisColumn: 0,
  valueColumn: 1,
  uncertaintyColumn: null,
  axisUnit: 'meV',
  wavelengthMedium: 'vacuum',
  applyJacobian: false,
  skipIncomplete: false,
  ...changes,
})

const detailOf = (action: () => unknown): string => {
  try {
    action()
  } catch (error) {
    if (error instanceof AppError) return error.detail
    throw error
  }
  throw new Error('expected a refusal')
}

describe('units of the axis', () => {
  it('turns nm into meV and sorts by energy', () => {
    const { energiesMeV, values } = readTable(encode('500;1\n600;2\n700;3\n'), reading({ axisUnit: 'nm' }))
    const expected = [hcMeVNm / 700, hcMeVNm / 600, hcMeVNm / 500]
    energiesMeV.forEach((energy, index) => expect(energy).toBeCloseTo(expected[index] ?? 0, 8))
    expect([...values]).toEqual([3, 2, 1])
  })

  it('turns eV and cm^-1 into meV', () => {
    const table = encode('1;1\n2;2\n3;3\n')
    expect([...readTable(table, reading({ axisUnit: 'eV' })).energiesMeV]).toEqual([1000, 2000, 3000])
    const [first] = readTable(table, reading({ axisUnit: 'cm^-1' })).energiesMeV
    expect(first).toBeCloseTo(0.1239841984332, 12)
  })

  it('multiplies values and uncertainties per nm by lambda^2/(hc)', () => {
    const table = encode('600;2;0.5\n601;2;0.5\n602;2;0.5\n')
    const asDensity = reading({ axisUnit: 'nm', uncertaintyColumn: 2, applyJacobian: true })
    const { values, uncertainties } = readTable(table, asDensity)
    const factor = 600 ** 2 / hcMeVNm
    expect(values.at(-1)).toBeCloseTo(2 * factor, 12)
    expect(uncertainties?.at(-1)).toBeCloseTo(0.5 * factor, 12)
  })

  it('keeps the area of a band under the change of variable', () => {
    // A Gaussian per nm, far inside the window: its area over nm and over meV is the same number.
    const rows = Array.from({ length: 4001 }, (_, index) => 560 + index * 0.02)
    const text = rows.map((nm) => `${nm.toFixed(2)};${Math.exp(-(((nm - 600) / 5) ** 2))}`).join('\n')
    const { energiesMeV, values } = readTable(encode(text), reading({ axisUnit: 'nm', applyJacobian: true }))
    let area = 0
    for (let index = 1; index < values.length; index += 1) {
      const step = (energiesMeV[index] ?? 0) - (energiesMeV[index - 1] ?? 0)
      area += (step * ((values[index] ?? 0) + (values[index - 1] ?? 0))) / 2
    }
    expect(area).toBeCloseTo(5 * Math.sqrt(Math.PI), 5)
  })

  it('takes air wavelengths to vacuum', () => {
    // Ciddor 1996, dry air: 633 nm in vacuum are 632.8250047682626 nm in air; 400 nm are 399.8869272433 nm.
    expect(633 / (1 + airRefractivity(633))).toBeCloseTo(632.8250047682626, 9)
    expect(toVacuumNm(632.8250047682626)).toBeCloseTo(633, 9)
    expect(toVacuumNm(399.8869272433)).toBeCloseTo(400, 9)
    const inAir = readTable(encode('620;1\n621;1\n622;1\n'), reading({ axisUnit: 'nm', wavelengthMedium: 'air' }))
    const inVacuum = readTable(encode('620;1\n621;1\n622;1\n'), reading({ axisUnit: 'nm' }))
    expect((inVacuum.energiesMeV[2] ?? 0) - (inAir.energiesMeV[2] ?? 0)).toBeCloseTo(0.553, 3)
  })
})

describe('rows', () => {
  it('averages points of equal energy and their uncertainties', () => {
    const table = encode('2;1;0.3\n1;5;0.1\n2;3;0.4\n3;7;0.1\n')
    const spectrum = readTable(table, reading({ uncertaintyColumn: 2 }))
    expect([...spectrum.energiesMeV]).toEqual([1, 2, 3])
    expect([...spectrum.values]).toEqual([5, 2, 7])
    expect(spectrum.uncertainties?.[1]).toBeCloseTo(0.25, 15)
    expect(spectrum.merged).toBe(2)
  })

  it('refuses a blank cell with its place unless told to leave the row out', () => {
    const table = encode('1;1\n2;\n3;3\n4;NaN\n5;5\n')
    expect(detailOf(() => readTable(table, reading()))).toMatch(/line 2, column 2: found a blank cell/)
    expect([...readTable(table, reading({ skipIncomplete: true })).energiesMeV]).toEqual([1, 3, 5])
  })

  it('never takes a number in part', () => {
    for (const cell of ['1,5', '1.5x', '1 5', '1..5', '1e', '--1', '0x10', '1_000', '١'])
      expect(
        detailOf(() => readTable(encode(`1;1\n2;${cell}\n3;3\n4;4\n`), reading())),
        cell,
      ).toMatch(/line 2, column 2/)
  })

  it('reads what doubles can hold, to the last digit', () => {
    const cells = [
      '5e-324',
      '1.7976931348623157e308',
      '-0',
      '0.1',
      '123456789012345678',
      '.5',
      '5.',
      '+1',
      '1D3',
      '\u22122',
    ]
    const table = encode(cells.map((cell, index) => `${index};${cell}`).join('\n'))
    const expected = [5e-324, 1.7976931348623157e308, 0, 0.1, 123456789012345680, 0.5, 5, 1, 1000, -2]
    const { values } = readTable(table, reading())
    expect([...values]).toEqual(expected)
    expect(Object.is(values[2], 0)).toBe(true)
  })

  it('names a column that the rows do not have', () => {
    expect(detailOf(() => readTable(encode('1;2\n3;4\n5;6\n'), reading({ valueColumn: 4 })))).toMatch(
      /line 1: found 2 columns; expected at least 5/,
    )
  })

  it('gives the same from one piece of bytes and from many', () => {
    const text = '\ufeffEnergy (meV);größe\r\n1850,5;0,1\r\n1851,5;0,2\r1852,5;0,3\n1853,5;0,4'
    const bytes = encode(text)
    const confirmed = reading({ decimalMark: 'comma', headerLines: 1 })
    const whole = readTable(bytes, confirmed)
    expect(whole.energiesMeV).toHaveLength(4)
    for (const size of [1, 2, 3, 7]) {
      const pieces = function* () {
        for (let start = 0; start < bytes.length; start += size) yield bytes.subarray(start, start + size)
      }
      expect(readTable(pieces, confirmed)).toEqual(whole)
      expect(proposeTable(pieces)).toEqual(proposeTable(bytes))
    }
  })
})

describe('a proposal', () => {
  const table = encode(
    [
      '# invented',
      'Energy (eV)\tSignal\tReference',
      ...Array.from({ length: 5000 }, (_, index) => `${(2.2 - index * 1e-4).toFixed(4)}\t${index % 7}.25\t1.5`),
    ].join('\n'),
  )

  it('shows what was understood', () => {
    const proposal = proposeTable(table)
    expect(proposal.columns.map(({ name, unit }) => [name, unit])).toEqual([
      ['Energy (eV)', 'eV'],
      ['Signal', ''],
      ['Reference', ''],
    ])
    expect(proposal.columns[0]?.sample.slice(0, 2)).toEqual(['2.2000', '2.1999'])
    expect(proposal.rows).toBe(5000)
    expect(proposal.head.slice(0, 2)).toEqual(['# invented', 'Energy (eV)\tSignal\tReference'])
    expect(proposal.range.energyMinMeV).toBeCloseTo(1700.1, 9)
    expect(proposal.range.energyMaxMeV).toBeCloseTo(2200, 9)
    expect(proposal.warnings.map(({ code }) => code)).toEqual(['columns-ignored', 'axis-descending'])
    expect(proposal.needsAnswer.map(({ field }) => field)).toEqual(['valueColumn'])
  })

  it('thins the preview and keeps its ends, highs and lows', () => {
    const { preview } = proposeTable(table)
    expect(preview.energiesMeV.length).toBeLessThanOrEqual(2000)
    expect(preview.energiesMeV[0]).toBeCloseTo(1700.1, 9)
    expect(preview.energiesMeV.at(-1)).toBeCloseTo(2200, 9)
    expect(Math.max(...preview.values)).toBe(6.25)
    expect(Math.min(...preview.values)).toBe(0.25)
  })

  it('drops a question once it is answered and keeps the others', () => {
    const open = encode(Array.from({ length: 9 }, (_, index) => `1.85${index};1.20${index};3.4`).join('\n'))
    const first = proposeTable(open)
    const fields = first.needsAnswer.map(({ field }) => field)
    expect(fields).toEqual(
      ['decimalMark', 'uncertaintyColumn', 'axisUnit'].filter((field) => fields.includes(field as never)),
    )
    expect(fields).toContain('axisUnit')
    const corrected = { ...first.reading, axisUnit: 'eV' as const }
    const second = proposeWith(open, corrected, ['axisUnit'])
    expect(second.reading).toEqual(corrected)
    expect(second.needsAnswer.map(({ field }) => field)).toEqual(fields.filter((field) => field !== 'axisUnit'))
    expect(second.range.energyMinMeV).toBeCloseTo(1850, 9)
  })

  it('asks when the axis says one unit and its numbers another', () => {
    const { needsAnswer } = proposeTable(encode('Energy (meV);OD\n1.8;1\n1.9;2\n2.0;3\n2.1;2\n'))
    expect(needsAnswer[0]?.message).toBe('The file says meV, but 1.8 to 2.1 meV is no usual range of a spectrum.')
  })

  it('warns of what it changes or leaves out', () => {
    const text = 'Energy (meV);OD\n1850;1\n1852;2\n1851;3\n1851;5\n1860;\u22120.5\nend of data\n'
    const proposal = proposeTable(encode(text))
    expect(proposal.warnings.map(({ code }) => code).sort()).toEqual(
      [
        'axis-not-monotonic',
        'axis-uneven',
        'footer-left-out',
        'points-duplicate',
        'signs-unusual',
        'values-negative',
      ].sort(),
    )
  })
})
