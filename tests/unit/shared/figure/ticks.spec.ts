import { describe, expect, it } from 'vitest'
import { decimate } from '../../../../shared/figure/decimate'
import { formatDigits, formatPlain, quantityOf, unitOf } from '../../../../shared/figure/format'
import { labelWithFactor, linearTicks, logTicks } from '../../../../shared/figure/ticks'

describe('ticks', () => {
  it('stand at round values with as many decimals as their step needs', () => {
    expect(linearTicks({ low: 0, high: 0.21 }, 5)).toMatchObject({
      major: [0, 0.05, 0.1, 0.15, 0.2],
      labels: ['0.00', '0.05', '0.10', '0.15', '0.20'],
      factorExponent: 0,
    })
    expect(linearTicks({ low: -3, high: 3 }, 4).labels).toEqual(['−2', '0', '2'])
  })

  it('take a power of ten out of very small and very large values and name it before the unit', () => {
    const ticks = linearTicks({ low: 0, high: 4.2e-4 }, 5)
    expect(ticks.labels).toEqual(['0', '1', '2', '3', '4'])
    expect(labelWithFactor('absorption (1/meV)', ticks.factorExponent)).toBe('absorption (10⁻⁴/meV)')
    expect(labelWithFactor('signal (ps)', 6)).toBe('signal (10⁶ ps)')
    expect(labelWithFactor('signal', 6)).toBe('signal (10⁶)')
    expect(labelWithFactor('signal (ps)', 0)).toBe('signal (ps)')
  })

  it('leave minor ticks out where they would touch', () => {
    expect(linearTicks({ low: 0, high: 10 }, 5, 400).minor.length).toBeGreaterThan(10)
    expect(linearTicks({ low: 0, high: 10 }, 5, 40).minor).toEqual([])
  })

  it('are decades with nine parts on a logarithmic axis', () => {
    const ticks = logTicks({ low: -3.2, high: 0.1 }, 6)
    expect(ticks.major).toEqual([-3, -2, -1, 0])
    expect(ticks.labels).toEqual(['10⁻³', '10⁻²', '10⁻¹', '1'])
    expect(ticks.minor).toContain(-3 + Math.log10(2))
    expect(ticks.minor.every((at) => at > -3.2 && at < 0.1)).toBe(true)
  })

  it('are plain values where less than a decade is in sight', () => {
    const ticks = logTicks({ low: Math.log10(2.1), high: Math.log10(7.9) }, 5)
    expect(ticks.labels).toEqual(['3', '4', '5', '6', '7'])
    ticks.major.forEach((at, k) => expect(10 ** at).toBeCloseTo(k + 3, 10))
  })
})

describe('numbers in figures', () => {
  it('carry a true minus and powers beyond ordinary sizes', () => {
    expect(formatPlain(-0.25)).toBe('−0.25')
    expect(formatPlain(0.1 + 0.2)).toBe('0.3')
    expect(formatPlain(2.5e-7)).toBe('2.5 × 10⁻⁷')
    expect(formatPlain(1e6)).toBe('10⁶')
    expect(formatDigits(1234.5678)).toBe('1235')
    expect(formatDigits(NaN)).toBe('–')
    expect(unitOf('photon energy (meV)')).toBe('meV')
    expect(quantityOf('photon energy (meV)')).toBe('photon energy')
  })
})

describe('thinning', () => {
  it('keeps the peak, the ends and the order of a long curve', () => {
    const n = 200_000
    const x = Float64Array.from({ length: n }, (_, i) => i / n)
    const y = Float64Array.from(x, (at, i) => (i === 77_777 ? 100 : Math.sin(20 * at)))
    const kept = decimate(x, y, 0, 1, 300)
    expect(kept.length).toBeLessThanOrEqual(4 * 301)
    expect(kept).toContain(77_777)
    expect(kept[0]).toBe(0)
    expect(kept.at(-1)).toBe(n - 1)
    expect(kept.every((index, k) => k === 0 || index > (kept[k - 1] as number))).toBe(true)
  })

  it('keeps one neighbour outside a narrow range, so that the line reaches the frame', () => {
    const x = Float64Array.from({ length: 100 }, (_, i) => i)
    expect(decimate(x, x, 40.5, 43.5, 100)).toEqual([40, 41, 42, 43, 44])
    expect(decimate(x, x, 200, 300, 100)).toEqual([99])
    expect(decimate(new Float64Array(0), new Float64Array(0), 0, 1, 10)).toEqual([])
  })
})
