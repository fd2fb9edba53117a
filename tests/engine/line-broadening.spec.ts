import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { HBAR_MEV_PS } from '../../shared/engine/constants'
import { lineBroadening, lineBroadeningAt } from '../../shared/engine/line-broadening'
import type { Phonons, TimeGrid } from '../../shared/engine/types'
import { BathTermSchema } from '../../shared/schemas/parameter-set'
import { arbitraryBathTerm, arbitraryPhonons, arbitraryTemperature, logUniform } from './arbitrary'
import { largest, powerLaw, relativeError } from './support'

const modes = [
  { label: 'acoustic', energyMeV: 1.4, huangRhys: 0.4 },
  { label: 'optical', energyMeV: 26, huangRhys: 0.2 },
]

/** Grid points, dense at the start, whose values are also computed one by one. */
const probes = (grid: TimeGrid, count: number): number[] => [
  ...new Set(Array.from({ length: count }, (_, k) => Math.floor((k / count) ** 3 * grid.samples))),
]

const gridError = (phonons: Phonons, temperatureK: number, grid: TimeGrid): { error: number; estimate: number } => {
  const whole = lineBroadening(phonons, temperatureK, grid)
  const indices = probes(grid, 120)
  const single = lineBroadeningAt(
    phonons,
    temperatureK,
    Float64Array.from(indices, (index) => index * grid.stepPs),
  )
  const errors = indices.map(
    (index, k) =>
      Math.hypot(whole.re[index]! - single.re[k]!, whole.im[index]! - single.im[k]!) /
      Math.max(1, Math.hypot(single.re[k]!, single.im[k]!)),
  )
  return { error: largest(errors), estimate: whole.errorEstimate }
}

describe('g0 on grids', () => {
  for (const [name, phonons] of [
    [
      'Gaussian cutoff, p = 1 and 3',
      { bath: [powerLaw({ exponent: 1, couplingStrength: 0.05 }), powerLaw()], modes: [] },
    ],
    ['exponential cutoff, p = 2', { bath: [powerLaw({ exponent: 2, cutoffShape: 'exponential' })], modes: [] }],
    ['everything together', { bath: [powerLaw({ exponent: 1.5 }), powerLaw({ cutoffShape: 'exponential' })], modes }],
  ] as [string, Phonons][]) {
    for (const temperatureK of [0, 4, 300]) {
      it(`${name}, ${temperatureK} K: equals one-by-one evaluation, and the estimate covers the difference`, () => {
        for (const grid of [
          { stepPs: 0.01, samples: 8192 },
          { stepPs: 0.25, samples: 4096 },
        ]) {
          const { error, estimate } = gridError(phonons, temperatureK, grid)
          expect(error).toBeLessThan(1e-11)
          expect(estimate).toBeGreaterThanOrEqual(error)
          expect(estimate).toBeLessThan(1e-10)
        }
      })
    }
  }

  it('gives far times to the same accuracy as near ones', () => {
    const phonons = { bath: [powerLaw({ exponent: 1, couplingStrength: 1e-3 })], modes: [] }
    const times = Float64Array.from({ length: 2000 }, (_, index) => 5000 + 0.01 * index)
    const many = lineBroadeningAt(phonons, 77, times)
    const few = lineBroadeningAt(phonons, 77, times.subarray(990, 1010))
    few.re.forEach((value, index) => expect(relativeError(many.re[990 + index]!, value)).toBeLessThan(1e-13))
  })

  it('takes times in any order', () => {
    const phonons = { bath: [powerLaw()], modes }
    const forward = Float64Array.from({ length: 1000 }, (_, index) => 0.05 * index)
    const backward = Float64Array.from(forward).reverse()
    const a = lineBroadeningAt(phonons, 30, forward)
    const b = lineBroadeningAt(phonons, 30, backward)
    expect(Float64Array.from(b.re).reverse()).toEqual(a.re)
    expect(Float64Array.from(b.im).reverse()).toEqual(a.im)
  })

  it('is zero at t = 0 and for an empty bath', () => {
    const g = lineBroadening({ bath: [powerLaw()], modes }, 300, { stepPs: 0.02, samples: 512 })
    expect([g.re[0], g.im[0]]).toEqual([0, 0])
    const empty = lineBroadening({ bath: [], modes: [] }, 300, { stepPs: 0.02, samples: 64 })
    expect(empty.re.every((value) => value === 0)).toBe(true)
  })
})

describe('limits and symmetries of g0', () => {
  it('curves upward at the start as half the variance: Re g0 -> t^2/2 (1/pi) Int J coth', () => {
    const phonons = { bath: [powerLaw()], modes: [] }
    // (1/pi) Int J dw = a w_c^2 Gamma(2)/2 for the Gaussian cutoff, p = 3, T = 0.
    const variance = 0.5 * (2 / HBAR_MEV_PS) ** 2 * 0.5
    const g = lineBroadeningAt(phonons, 0, Float64Array.of(1e-5))
    expect(relativeError(g.re[0]!, (variance * 1e-10) / 2)).toBeLessThan(1e-8)
  })

  it('is additive in the terms and linear in every strength', () => {
    const times = Float64Array.of(0.01, 0.3, 2, 40)
    const [a, b] = [powerLaw({ exponent: 1 }), powerLaw({ cutoffShape: 'exponential' })]
    const sum = lineBroadeningAt({ bath: [a, b], modes }, 50, times)
    const parts = [
      { bath: [a], modes: [] },
      { bath: [b], modes: [] },
      { bath: [], modes },
    ].map((phonons) => lineBroadeningAt(phonons, 50, times))
    times.forEach((_, index) => {
      const total = parts.reduce((value, part) => value + part.re[index]!, 0)
      expect(relativeError(sum.re[index]!, total)).toBeLessThan(1e-13)
    })
    const doubled = lineBroadeningAt(
      { bath: [{ ...a, couplingStrength: 2 * a.couplingStrength }], modes: [] },
      50,
      times,
    )
    times.forEach((_, index) => expect(relativeError(doubled.re[index]!, 2 * parts[0]!.re[index]!)).toBeLessThan(1e-14))
  })

  it('depends on energies and times only through their products with hbar', () => {
    fc.assert(
      fc.property(arbitraryPhonons, arbitraryTemperature, logUniform(0.1, 10), (phonons, temperatureK, scale) => {
        const scaled: Phonons = {
          bath: phonons.bath.map((term) => ({ ...term, cutoffEnergyMeV: term.cutoffEnergyMeV * scale })),
          modes: phonons.modes.map((mode) => ({ ...mode, energyMeV: mode.energyMeV * scale })),
        }
        const times = Float64Array.of(0.001, 0.04, 0.9, 12)
        const a = lineBroadeningAt(phonons, temperatureK, times)
        const b = lineBroadeningAt(
          scaled,
          temperatureK * scale,
          times.map((time) => time / scale),
        )
        return times.every(
          (_, index) =>
            relativeError(a.re[index]!, b.re[index]!) < 1e-10 &&
            relativeError(a.im[index]!, b.im[index]!, Math.hypot(a.re[index]!, a.im[index]!)) < 1e-10,
        )
      }),
      { numRuns: 60 },
    )
  })
})

describe('properties of g0 for any valid set', () => {
  it('is finite, starts at 0, has Re g0 >= 0, and its estimate stays below 1e-9 (1e-7 under p = 0.5) up to 1 ns', () => {
    fc.assert(
      fc.property(
        arbitraryPhonons,
        arbitraryTemperature,
        logUniform(1e-5, 10),
        fc.integer({ min: 16, max: 3000 }),
        (phonons, temperatureK, stepPs, samples) => {
          const g = lineBroadening(phonons, temperatureK, { stepPs, samples })
          const bound = phonons.bath.some((term) => term.exponent < 0.5) ? 1e-7 : 1e-9
          return (
            g.re.every((value) => value >= 0 && value < Infinity) &&
            g.im.every((value) => Number.isFinite(value)) &&
            (g.errorEstimate <= bound || stepPs * samples > 1000)
          )
        },
      ),
      { numRuns: 150 },
    )
  })

  it('grows with temperature at every time', () => {
    fc.assert(
      fc.property(
        arbitraryPhonons,
        fc.double({ min: 0, max: 550, noNaN: true }),
        fc.double({ min: 0.1, max: 50, noNaN: true }),
        (phonons, cold, more) => {
          const times = Float64Array.of(0.003, 0.1, 2, 30, 700)
          const a = lineBroadeningAt(phonons, cold, times)
          const b = lineBroadeningAt(phonons, cold + more, times)
          return times.every((_, index) => b.re[index]! >= a.re[index]! * (1 - 1e-12))
        },
      ),
      { numRuns: 100 },
    )
  })

  it('holds for every kind of bath, one by one and on grids, which agree', () => {
    fc.assert(
      fc.property(arbitraryBathTerm, arbitraryTemperature, logUniform(1e-3, 1), (term, temperatureK, stepPs) => {
        expect(BathTermSchema.safeParse(term).error?.issues ?? []).toEqual([])
        const phonons: Phonons = { bath: [term], modes: [] }
        const grid = { stepPs, samples: 400 }
        const whole = lineBroadening(phonons, temperatureK, grid)
        const indices = [1, 3, 20, 150, 399]
        const single = lineBroadeningAt(
          phonons,
          temperatureK,
          Float64Array.from(indices, (index) => index * stepPs),
        )
        const size = (k: number) => Math.max(1, Math.hypot(single.re[k]!, single.im[k]!))
        return (
          [...whole.re, ...whole.im, ...single.im].every(Number.isFinite) &&
          whole.re.every((value) => value >= -whole.errorEstimate) &&
          single.re.every((value) => value >= 0 && value < Infinity) &&
          whole.errorEstimate < 1e-7 &&
          indices.every(
            (index, k) =>
              Math.hypot(whole.re[index]! - single.re[k]!, whole.im[index]! - single.im[k]!) <=
              whole.errorEstimate * size(k),
          )
        )
      }),
      { numRuns: 150 },
    )
  })
})
