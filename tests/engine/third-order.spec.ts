import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { ensembleSigma, homogeneousRate } from '../../shared/engine/coherence-decay'
import { linearSignal } from '../../shared/engine/linear'
import { lineBroadeningAt } from '../../shared/engine/line-broadening'
import { thirdOrderPathways, type Pathways } from '../../shared/engine/third-order'
import { arbitraryPhonons, arbitraryTemperature, logUniform } from './arbitrary'
import { largest } from './support'
import { lineModel, modelOf, referenceCases, richModel } from './support/line-model'

const keys = ['r1', 'r2', 'r3', 'r4'] as const

describe('third-order pathways', () => {
  it.each(referenceCases('thirdOrderPathways'))('equal the reference %s', (_, reference) => {
    const points = reference.samples!.points as [number, number, number][]
    const found = thirdOrderPathways(modelOf(reference.parameters), points)
    const values = reference.values as unknown as Record<string, { real: number[]; imag: number[] }>
    for (const key of keys) {
      const { real, imag } = values[key.toUpperCase()]!
      expect(largest(real.map((value, i) => Math.abs(value - found[key].re[i]!)))).toBeLessThan(1e-12)
      expect(largest(imag.map((value, i) => Math.abs(value - found[key].im[i]!)))).toBeLessThan(1e-12)
    }
  })

  const model = richModel({ populationLifetimePs: 7 })
  const difference = (a: Pathways[keyof Pathways], b: Pathways[keyof Pathways], conjugated = false) =>
    largest(a.re.map((value, i) => Math.hypot(value - b.re[i]!, a.im[i]! - (conjugated ? -1 : 1) * b.im[i]!)))
  const linearAt = (times: number[]) => {
    // One sample at a time: the signal at t is that of a grid of step t, sample 1.
    const parts = times.map((t) =>
      linearSignal(model, lineBroadeningAt(model, model.temperatureK, Float64Array.of(0, t)), t),
    )
    return { re: Float64Array.from(parts, ({ re }) => re[1]!), im: Float64Array.from(parts, ({ im }) => im[1]!) }
  }
  const moments = [0.07, 0.4, 1.3, 2.9]

  it('coincide at t2 = 0 with the linear signal of t1 + t3', () => {
    const r = thirdOrderPathways(
      model,
      moments.map((t) => [t, 0, 0.6] as const),
    )
    expect(difference(r.r2, r.r3)).toBeLessThan(1e-14)
    expect(difference(r.r1, r.r4)).toBeLessThan(1e-14)
    expect(difference(r.r1, linearAt(moments.map((t) => t + 0.6)))).toBeLessThan(1e-14)
  })

  it('coincide at t1 = 0 with the linear signal of t3, population decay apart', () => {
    const r = thirdOrderPathways(
      model,
      moments.map((t) => [0, 1.1, t] as const),
    )
    const linear = linearAt(moments)
    const population = Math.exp(-1.1 / 7)
    const decayed = { re: linear.re.map((v) => v * population), im: linear.im.map((v) => v * population) }
    expect(difference(r.r1, r.r2)).toBeLessThan(1e-14)
    expect(difference(r.r3, r.r4)).toBeLessThan(1e-14)
    // The bleach keeps the linear signal; emission has relaxed by t2 and differs.
    expect(difference(r.r3, decayed)).toBeLessThan(1e-14)
    expect(difference(r.r1, decayed)).toBeGreaterThan(1e-3)
  })

  it('coincide at t3 = 0 with the linear signal of t1 and its conjugate', () => {
    const r = thirdOrderPathways(
      model,
      moments.map((t) => [t, 0.9, 0] as const),
    )
    const linear = linearAt(moments)
    const population = Math.exp(-0.9 / 7)
    const decayed = { re: linear.re.map((v) => v * population), im: linear.im.map((v) => v * population) }
    for (const key of ['r1', 'r4'] as const) expect(difference(r[key], decayed)).toBeLessThan(1e-14)
    for (const key of ['r2', 'r3'] as const) expect(difference(r[key], decayed, true)).toBeLessThan(1e-14)
  })

  it('are finite and never above 1 for any model', () => {
    const time = fc.oneof(fc.constant(0), logUniform(1e-4, 1e3))
    fc.assert(
      fc.property(arbitraryPhonons, arbitraryTemperature, time, time, time, (phonons, temperatureK, t1, t2, t3) => {
        const found = thirdOrderPathways(lineModel({ ...phonons, temperatureK }), [[t1, t2, t3]])
        for (const key of keys) {
          const size = Math.hypot(found[key].re[0]!, found[key].im[0]!)
          expect(size).toBeLessThanOrEqual(1 + 1e-6)
        }
      }),
      { numRuns: 100 },
    )
  })

  it('carry the homogeneous and ensemble factors of their kind', () => {
    const bare = lineModel({ zeroPhononFwhmMeV: 0.7, ensembleFwhmMeV: 2 })
    const r = thirdOrderPathways(bare, [[0.3, 0, 0.8]])
    const [gam, sig] = [homogeneousRate(bare), ensembleSigma(bare)]
    expect(r.r2.re[0]).toBeCloseTo(Math.exp(-gam * 1.1 - (sig * 0.5) ** 2 / 2), 14)
    expect(r.r1.re[0]).toBeCloseTo(Math.exp(-gam * 1.1 - (sig * 1.1) ** 2 / 2), 14)
  })
})
