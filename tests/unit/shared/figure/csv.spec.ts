import { parse } from 'csv-parse/sync'
import { describe, expect, it } from 'vitest'
import { neutralize, toCsv, toCsvCell } from '../../../../shared/figure/csv'
import { lineFigureCsv } from '../../../../shared/figure/line-csv'

const starts = ['=', '+', '-', '@', '\t', '\r', '\0', '=-']
const bodies = ['1+1', 'cmd|"/C calc"!A0', 'SUM(A1:A9)', 'HYPERLINK("x","y")', ' text, with comma']
const hostile = starts.flatMap((start) => bodies.map((body) => `${start}${body}`))

describe('comma-separated values', () => {
  it('makes 40 texts inert that a spreadsheet would run, and keeps what they say', () => {
    expect(hostile).toHaveLength(40)
    const rows = parse(toCsv([{ name: '@label', values: hostile }])) as string[][]
    expect(rows.map((row) => row[0])).toEqual(["'@label", ...hostile.map((text) => `'${text}`)])
    for (const [cell] of rows) expect(cell).not.toMatch(/^[=+\-@\t\r\0]/)
  })

  it('brings 1000 negative numbers back bit by bit', () => {
    // Linear congruential generator, seed 7: any exponent from 1e-300 to 1e300.
    let state = 7
    const random = () => (state = (state * 1_103_515_245 + 12_345) % 2_147_483_648) / 2_147_483_648
    const numbers = Array.from({ length: 1000 }, () => -(0.1 + random()) * 10 ** Math.round(600 * random() - 300))
    const rows = parse(toCsv([{ name: 'value', values: Float64Array.from(numbers) }])) as string[][]
    expect(rows.slice(1).map((row) => Number(row[0]))).toEqual(numbers)
    expect(rows.slice(1).every((row) => row[0]?.startsWith('-'))).toBe(true)
  })

  it('quotes as RFC 4180 asks and ends every line with CRLF', () => {
    expect(toCsv([{ name: 'a "b", c', values: ['line\nbreak', 'plain'] }])).toBe(
      '"a ""b"", c"\r\n"line\nbreak"\r\nplain\r\n',
    )
  })

  it('leaves cells empty where there is no number, and where a column has ended', () => {
    expect(
      toCsv([
        { name: 'x', values: [1, NaN, Infinity] },
        { name: 'y', values: [-0] },
      ]),
    ).toBe('x,y\r\n1,0\r\n,\r\n,\r\n')
    expect(toCsvCell(null)).toBe('')
    expect(neutralize('4 K')).toBe('4 K')
  })
})

describe('data of a figure of curves', () => {
  it('names every column with its unit and shares an axis between curves', () => {
    const x = Float64Array.of(1, 2)
    const csv = lineFigureCsv({
      xLabel: 'photon energy (meV)',
      yLabel: 'absorption (1/meV)',
      residualLabel: 'residual (σ)',
      scale: 'linear',
      series: [
        { id: 'a', label: '4 K', role: 'simulation', x, y: Float64Array.of(0.1, 0.2) },
        { id: 'b', label: '=77 K', role: 'simulation', x: Float64Array.of(1, 2), y: Float64Array.of(0.3, 0.4) },
        {
          id: 'c',
          label: 'measured',
          role: 'measurement',
          x: Float64Array.of(3),
          y: Float64Array.of(5),
          uncertainty: Float64Array.of(0.5),
        },
        { id: 'd', label: 'measured', role: 'residual', x: Float64Array.of(3), y: Float64Array.of(-1) },
      ],
    })
    expect(csv.split('\r\n')).toEqual([
      'photon energy (meV),"absorption, 4 K (1/meV)","absorption, =77 K (1/meV)",photon energy (meV),"absorption, measured (1/meV)","uncertainty, measured (1/meV)","residual, measured (σ)"',
      '1,0.1,0.3,3,5,0.5,-1',
      '2,0.2,0.4,,,,',
      '',
    ])
  })
})
