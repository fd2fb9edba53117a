import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fitScaleOffset, type ScaleOffsetFit } from '../../shared/engine/compare'
import { interpolateMonotone } from '../../shared/engine/interpolate'
import { largest } from './support'

const axis = (from: number, to: number, count: number) =>
  Float64Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1))
const line = (x: number) => 1 / (1 + ((x - 2000) / 1.5) ** 2)
const simulated = { energiesMeV: axis(1980, 2020, 2001), values: axis(1980, 2020, 2001).map(line) }
const fitOf = (result: ReturnType<typeof fitScaleOffset>): ScaleOffsetFit => {
  if (!result.ok) throw new Error(result.message)
  return result
}

/** Noise of standard deviation 1 from a small generator with a seed (two uniform numbers by Box and Muller). */
const noise = (count: number, seed: number) => {
  let state = seed
  const uniform = () => {
    state = (state * 1664525 + 1013904223) % 4294967296
    return (state + 0.5) / 4294967296
  }
  return Float64Array.from(
    { length: count },
    () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform()),
  )
}

describe('scale and offset by least squares', () => {
  const energiesMeV = axis(1990.03, 2009.7, 173)

  it('are found exactly in exact data', () => {
    const values = energiesMeV.map((x) => 12.5 * line(x) - 3)
    const fit = fitOf(fitScaleOffset({ energiesMeV, values }, simulated))
    expect(fit.scale.value).toBeCloseTo(12.5, 4)
    expect(fit.offset.value).toBeCloseTo(-3, 4)
    expect(fit.points).toBe(173)
    expect(fit.leftOut).toBe(0)
    expect(largest(fit.residuals.map(Math.abs))).toBeLessThan(1e-3)
  })

  // The normal equations of two unknowns, written out, as the independent solution.
  it('equal the textbook solution, its errors and its chi-square', () => {
    const uncertainties = energiesMeV.map((_, i) => 0.02 + 0.001 * (i % 7))
    const scatter = noise(173, 7)
    const values = energiesMeV.map((x, i) => 4 * line(x) + 0.2 + scatter[i]! * uncertainties[i]!)
    const fit = fitOf(fitScaleOffset({ energiesMeV, values, uncertainties }, simulated))
    const at = interpolateMonotone(simulated.energiesMeV, simulated.values)
    let [s, sx, sxx, sy, sxy] = [0, 0, 0, 0, 0]
    energiesMeV.forEach((energy, i) => {
      const w = 1 / uncertainties[i]! ** 2
      const x = at(energy)
      s += w
      sx += w * x
      sxx += w * x * x
      sy += w * values[i]!
      sxy += w * x * values[i]!
    })
    const determinant = s * sxx - sx * sx
    expect(fit.scale.value).toBeCloseTo((s * sxy - sx * sy) / determinant, 10)
    expect(fit.offset.value).toBeCloseTo((sxx * sy - sx * sxy) / determinant, 10)
    expect(fit.scale.standardError).toBeCloseTo(Math.sqrt(s / determinant), 10)
    expect(fit.offset.standardError).toBeCloseTo(Math.sqrt(sxx / determinant), 10)
    expect(fit.chiSquare).toBeCloseTo(
      fit.residuals.reduce((a, b) => a + b * b, 0),
      9,
    )
    expect(fit.reducedChiSquare).toBeCloseTo(fit.chiSquare / 171, 12)
    // 171 degrees of freedom: one within 0.3 of chi-square per degree.
    expect(Math.abs(fit.reducedChiSquare! - 1)).toBeLessThan(0.3)
    expect(Math.abs(fit.scale.value - 4)).toBeLessThan(4 * fit.scale.standardError!)
  })

  it('take their errors from the scatter when none are given', () => {
    const scatter = noise(173, 3)
    const values = energiesMeV.map((x, i) => line(x) + 0.05 * scatter[i]!)
    const unweighted = fitOf(fitScaleOffset({ energiesMeV, values }, simulated))
    const uncertainties = energiesMeV.map(() => Math.sqrt(unweighted.reducedChiSquare!))
    const weighted = fitOf(fitScaleOffset({ energiesMeV, values, uncertainties }, simulated))
    expect(weighted.scale.standardError).toBeCloseTo(unweighted.scale.standardError!, 12)
    expect(weighted.reducedChiSquare).toBeCloseTo(1, 12)
  })

  it('hold one of the two when asked', () => {
    const values = energiesMeV.map((x) => 2 * line(x) + 1)
    const withoutOffset = fitOf(fitScaleOffset({ energiesMeV, values }, simulated, { offset: 1 }))
    expect(withoutOffset.scale.value).toBeCloseTo(2, 5)
    expect(withoutOffset.offset).toEqual({ value: 1, standardError: null })
    const withoutScale = fitOf(fitScaleOffset({ energiesMeV, values }, simulated, { scale: 2 }))
    expect(withoutScale.offset.value).toBeCloseTo(1, 5)
    const held = fitOf(fitScaleOffset({ energiesMeV, values }, simulated, { scale: 1, offset: 0 }))
    expect(held.chiSquare).toBeCloseTo(
      values.reduce((sum, v, i) => sum + (v - line(energiesMeV[i]!)) ** 2, 0),
      4,
    )
  })

  it('leave out what lies outside the simulation or the range', () => {
    const wide = axis(1900, 2100, 401)
    const fit = fitOf(
      fitScaleOffset({ energiesMeV: wide, values: wide.map(line) }, simulated, { rangeMeV: [1995, 2005] }),
    )
    expect(fit.points).toBe(21)
    expect(fit.leftOut).toBe(380)
  })

  it('stay well conditioned for a small line on a large offset', () => {
    const values = energiesMeV.map((x) => 1e-6 * line(x) + 1000)
    const fit = fitOf(fitScaleOffset({ energiesMeV, values }, simulated))
    expect(Math.abs(fit.scale.value - 1e-6)).toBeLessThan(1e-11)
    expect(Math.abs(fit.offset.value - 1000)).toBeLessThan(1e-9)
  })

  it('fail in words', () => {
    const few = { energiesMeV: Float64Array.of(2000), values: Float64Array.of(1) }
    expect(fitScaleOffset(few, simulated)).toMatchObject({
      ok: false,
      code: 'too-few-points',
      message: 'expected at least 2 common points; found 1',
    })
    const away = { energiesMeV: axis(100, 200, 9), values: axis(1, 2, 9) }
    const apart = fitScaleOffset(away, simulated)
    expect(apart).toMatchObject({ ok: false, code: 'no-overlap' })
    expect(!apart.ok && apart.message).toContain('100 to 200 meV')
    const flat = { energiesMeV: simulated.energiesMeV, values: simulated.values.map(() => 2) }
    expect(fitScaleOffset({ energiesMeV, values: energiesMeV.map(line) }, flat)).toMatchObject({
      ok: false,
      code: 'zero-variance',
    })
    const zero = { energiesMeV: simulated.energiesMeV, values: simulated.values.map(() => 0) }
    expect(fitScaleOffset({ energiesMeV, values: energiesMeV }, zero, { offset: 0 })).toMatchObject({
      ok: false,
      code: 'zero-variance',
    })
    const uncertainties = energiesMeV.map((_, i) => (i === 4 ? 0 : 1))
    const bad = fitScaleOffset({ energiesMeV, values: energiesMeV, uncertainties }, simulated)
    expect(bad).toMatchObject({ ok: false, code: 'invalid-uncertainty' })
    expect(!bad.ok && bad.message).toContain('point 4')
    expect(fitScaleOffset({ energiesMeV, values: energiesMeV.map(() => NaN) }, simulated)).toMatchObject({
      ok: false,
      code: 'not-finite',
    })
  })

  it('scale with their data', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-6, max: 1e6, noNaN: true }),
        fc.double({ min: -1e3, max: 1e3, noNaN: true }),
        (scale, offset) => {
          const values = energiesMeV.map((x) => scale * line(x) + offset)
          const fit = fitOf(fitScaleOffset({ energiesMeV, values }, simulated))
          const size = Math.abs(scale) + Math.abs(offset)
          expect(Math.abs(fit.scale.value - scale)).toBeLessThan(1e-4 * size)
          expect(Math.abs(fit.offset.value - offset)).toBeLessThan(1e-4 * size)
        },
      ),
      { numRuns: 50 },
    )
  })
})

describe('monotone cubic interpolation', () => {
  it('goes through its points and overshoots nowhere', () => {
    const x = Float64Array.of(0, 1, 1.5, 4, 5)
    const y = Float64Array.of(0, 0, 2, 2.1, -1)
    const at = interpolateMonotone(x, y)
    x.forEach((value, i) => expect(at(value)).toBeCloseTo(y[i]!, 14))
    for (let u = 0; u <= 5; u += 0.01) {
      const i = Math.max(
        0,
        x.findLastIndex((value) => value <= u && value < 5),
      )
      expect(at(u)).toBeGreaterThanOrEqual(Math.min(y[i]!, y[i + 1]!) - 1e-12)
      expect(at(u)).toBeLessThanOrEqual(Math.max(y[i]!, y[i + 1]!) + 1e-12)
    }
    expect(at(-0.1)).toBeNaN()
    expect(at(5.1)).toBeNaN()
  })

  it('converges with the third power of the step on a monotone curve', () => {
    const errorOf = (count: number) => {
      const x = axis(0, 2, count)
      const at = interpolateMonotone(x, x.map(Math.exp))
      return largest(axis(0.5, 1.5, 997).map((u) => Math.abs(at(u) - Math.exp(u))))
    }
    expect(errorOf(41) / errorOf(81)).toBeGreaterThan(6)
  })
})
