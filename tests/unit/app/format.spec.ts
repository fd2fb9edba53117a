import { describe, expect, it } from 'vitest'
import {
  formatBrief,
  formatBytes,
  formatDuration,
  formatExact,
  formatNumber,
  formatUnit,
} from '../../../app/utils/format'
import { parseSymbol, symbolText } from '../../../app/utils/parse-symbol'

describe('numbers as printed', () => {
  it.each([
    [0, '0'],
    [0.30000000000000004, '0.3'],
    [-1.5, '−1.5'],
    [1234567, '1.235 × 10⁶'],
    [0.0000123, '1.23 × 10⁻⁵'],
    [99999, '100000'],
    [Number.NaN, '–'],
  ])('%d reads %s', (value, expected) => expect(formatNumber(value)).toBe(expected))

  it('shows every digit on entry and cuts with an ellipsis at rest', () => {
    expect(formatExact(-1999.74513601936)).toBe('−1999.74513601936')
    expect(formatBrief(1999.74513601936)).toBe('1999.7451…')
    expect(formatBrief(1.23456789012e-7)).toBe('1.2345…e-7')
    expect(formatBrief(2000)).toBe('2000')
  })

  it('prints units, durations and sizes', () => {
    expect(formatUnit('cm^-1')).toBe('cm⁻¹')
    expect(formatUnit('1')).toBe('')
    expect([0.2, 42, 200, 7500].map(formatDuration)).toEqual(['< 1 s', '42 s', '3 min', '2 h 5 min'])
    expect([12, 4200, 43_100_000].map(formatBytes)).toEqual(['12 B', '4.2 kB', '43.1 MB'])
  })
})

describe('symbols', () => {
  it('sets variables in italics, functions, numbers and words upright', () => {
    expect(parseSymbol('Γ_{ens}')).toEqual([
      { text: 'Γ', place: 'base', italic: true },
      { text: 'ens', place: 'sub', italic: false },
    ])
    expect(parseSymbol('exp(2x^n)').map((part) => [part.text, part.italic])).toEqual([
      ['exp', false],
      ['(2', false],
      ['x', true],
      ['n', true],
      [')', false],
    ])
  })

  it('reads as plain text for accessible names', () => expect(symbolText('E_{LO}')).toBe('ELO'))
})
