import { describe, expect, it } from 'vitest'
import { reorganizationEnergyMeV } from '../../shared/engine/bath-integrals'
import { lineBroadening, lineBroadeningAt } from '../../shared/engine/line-broadening'
import { lowEnergySensitivity } from '../../shared/engine/low-energy-sensitivity'
import { monotoneCubic } from '../../shared/engine/monotone-cubic'
import { spectralDensity } from '../../shared/engine/spectral-density'
import { BathTermSchema, type TabulatedTerm } from '../../shared/schemas/parameter-set'
import fixture from './reference/tabulated-broadening.json'
import { powerLaw, relativeError } from './support'

const table = (energiesMeV: number[], densityMeV: number[], lowEnergyExponent = 3): TabulatedTerm => ({
  kind: 'tabulated',
  energiesMeV,
  densityMeV,
  lowEnergyExponent,
})
const alone = (term: TabulatedTerm) => ({ bath: [term], modes: [] })

/** The power law with p = 3 and Gaussian cutoff as a table. */
const sampled = (step: number, points: number): TabulatedTerm => {
  const energies = Array.from({ length: points }, (_, index) => step * (index + 1))
  return table(energies, Array.from(spectralDensity([powerLaw()], Float64Array.from(energies))))
}

describe('tabulated spectral density', () => {
  it('equals mpmath quadrature of the same cubic pieces within 1e-12', () => {
    expect(fixture.cases).toHaveLength(4)
    for (const { term, temperatureK, timesPs, re, im } of fixture.cases) {
      const found = lineBroadeningAt(
        { bath: [BathTermSchema.parse(term)], modes: [] },
        temperatureK,
        Float64Array.from(timesPs),
      )
      timesPs.forEach((time, index) => {
        const where = `p = ${term.lowEnergyExponent}, ${temperatureK} K, ${time} ps`
        const size = Math.hypot(re[index]!, im[index]!)
        expect(relativeError(found.re[index]!, re[index]!, 1e-2 * size), where).toBeLessThan(1e-12)
        expect(relativeError(found.im[index]!, im[index]!, 1e-2 * size), where).toBeLessThan(1e-12)
      })
    }
  })

  it('gives on a grid what it gives one by one, within its own estimate', () => {
    const grid = { stepPs: 0.01, samples: 8192 }
    for (const temperatureK of [0, 300]) {
      const whole = lineBroadening(alone(sampled(0.2, 60)), temperatureK, grid)
      expect(whole.method).toContain('non-uniform Fourier transform')
      const indices = [0, 1, 2, 7, 41, 300, 2000, 5001, 8191]
      const times = Float64Array.from(indices, (index) => index * grid.stepPs)
      const single = lineBroadeningAt(alone(sampled(0.2, 60)), temperatureK, times)
      indices.forEach((index, k) => {
        const error = Math.hypot(whole.re[index]! - single.re[k]!, whole.im[index]! - single.im[k]!)
        expect(error / Math.max(1, Math.hypot(single.re[k]!, single.im[k]!))).toBeLessThanOrEqual(whole.errorEstimate)
      })
      expect(whole.errorEstimate).toBeLessThan(1e-9)
    }
  })

  it('approaches the density it was taken from as the step is halved', () => {
    const times = Float64Array.of(0.1, 0.5, 2)
    const exact = lineBroadeningAt({ bath: [powerLaw()], modes: [] }, 30, times)
    const error = (step: number) => {
      const found = lineBroadeningAt(alone(sampled(step, Math.round(12 / step))), 30, times)
      return Math.max(...times.map((_, index) => Math.abs(found.re[index]! - exact.re[index]!)))
    }
    // Monotone slopes are second order at the maximum of J, which limits the integral to third order.
    expect(error(0.1)).toBeLessThan(1e-3)
    expect(error(0.05) / error(0.1)).toBeLessThan(0.2)
  })

  it('is J_1 (E/E_1)^p below the first point and 0 above the last', () => {
    const term = table([1, 2, 3], [0.5, 1, 0.2], 1.5)
    const [below, first, last, above] = spectralDensity([term], Float64Array.of(0.25, 1, 3, 3.001))
    expect(below).toBeCloseTo(0.5 * 0.25 ** 1.5, 14)
    expect([first, last]).toEqual([expect.closeTo(0.5, 14), expect.closeTo(0.2, 14)])
    expect(above).toBe(0)
  })

  it('leaves out a point at 0 meV', () => {
    const times = Float64Array.of(0.1, 4)
    const a = lineBroadeningAt(alone(table([0, 1, 2, 3], [0, 0.5, 1, 0.2])), 30, times)
    const b = lineBroadeningAt(alone(table([1, 2, 3], [0.5, 1, 0.2])), 30, times)
    expect(a.re).toEqual(b.re)
  })

  it('tells how the zero-phonon weight rests on the assumed exponent', () => {
    const [found] = lowEnergySensitivity(alone(table([1, 2, 3], [0.05, 0.4, 0.2])), 10)
    expect(found).toMatchObject({ termIndex: 0, lowEnergyExponent: 3, weightWithLowerExponent: null })
    expect(found!.weightWithHigherExponent!).toBeGreaterThan(found!.weight!)
    const [cold] = lowEnergySensitivity(alone(table([1, 2, 3], [0.05, 0.4, 0.2])), 0)
    expect(cold!.weightWithLowerExponent!).toBeLessThan(cold!.weight!)
    expect(lowEnergySensitivity({ bath: [powerLaw()], modes: [] }, 0)).toEqual([])
  })

  it('scales lambda with the values', () => {
    const [one, two] = [table([1, 2, 3], [0.5, 1, 0.2]), table([1, 2, 3], [1, 2, 0.4])]
    expect(relativeError(reorganizationEnergyMeV(alone(two)), 2 * reorganizationEnergyMeV(alone(one)))).toBeLessThan(
      1e-14,
    )
  })
})

describe('monotone cubic', () => {
  it('stays between neighbouring points and passes through them', () => {
    const x = Float64Array.of(0, 1, 1.2, 3, 3.5, 7)
    const y = Float64Array.of(0, 0, 2, 2.1, 0.3, 0)
    const at = monotoneCubic(x, y)
    x.forEach((value, index) => expect(at(value)).toBeCloseTo(y[index]!, 14))
    for (let i = 0; i + 1 < x.length; i++) {
      for (let k = 0; k <= 20; k++) {
        const value = at(x[i]! + ((x[i + 1]! - x[i]!) * k) / 20)
        expect(value).toBeGreaterThanOrEqual(Math.min(y[i]!, y[i + 1]!) - 1e-15)
        expect(value).toBeLessThanOrEqual(Math.max(y[i]!, y[i + 1]!) + 1e-15)
      }
    }
  })

  it('is a straight line through two points', () => {
    expect(monotoneCubic(Float64Array.of(1, 3), Float64Array.of(2, 8))(1.5)).toBeCloseTo(3.5, 14)
  })
})

describe('bad tables are refused where they are wrong', () => {
  for (const [name, term, path, message] of [
    [
      'a value at 0 meV',
      table([0, 1, 2], [0.1, 1, 0]),
      ['densityMeV', 0],
      'a spectral density of 0 at 0 meV; found 0.1 meV',
    ],
    ['a negative value', table([1, 2], [1, -1]), ['densityMeV', 1], 'found -1'],
    ['energies out of order', table([1, 3, 2], [0, 1, 1]), ['energiesMeV', 2], 'found 2 after 3'],
    ['columns of different length', table([1, 2, 3], [0, 1]), ['densityMeV'], 'each of the 3 phonon energies; found 2'],
    ['a single point', table([1], [1]), ['energiesMeV'], 'found 1'],
  ] as const) {
    it(name, () => {
      const { error } = BathTermSchema.safeParse(term)
      const issue = error!.issues.find((entry) => JSON.stringify(entry.path) === JSON.stringify(path))
      expect(issue?.message).toContain(message)
    })
  }
})
