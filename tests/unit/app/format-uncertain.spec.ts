import { describe, expect, it, vi } from 'vitest'
import { formatNumber } from '../../../app/utils/format'

vi.stubGlobal('formatNumber', formatNumber)
const { formatUncertain } = await import('../../../app/utils/format-uncertain')

describe('value with uncertainty in the last digits', () => {
  it.each([
    [1.2437, 0.034, '1.24(3)'],
    [1.2437, 0.0123, '1.244(12)'],
    [-1.2437, 0.034, '−1.24(3)'],
    [1234.567, 2.4, '1235(2)'],
    [0.00123, 0.00004, '0.00123(4)'],
    [0.0000123, 0.0000004, '1.23(4) × 10⁻⁵'],
    [12345678, 1234, '1.23457(12) × 10⁷'],
    [0.004, 0.03, '0.00(3)'],
    [0, 0.5, '0.0(5)'],
  ])('%f with %f reads %s', (value, uncertainty, text) => {
    expect(formatUncertain(value, uncertainty)).toBe(text)
  })

  it('is the plain number where no uncertainty is known', () => {
    for (const unknown of [null, 0, NaN, Infinity, -1]) expect(formatUncertain(1.23456789, unknown)).toBe('1.2346')
  })
})
