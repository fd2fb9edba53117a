import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { huangRhysLineWeights, modeDebyeWallerFactor, modeZeroPhononWeight } from '../../shared/engine/huang-rhys'
import { logUniform } from './arbitrary'
import reference from './reference/line-shape-values.json'
import { relativeError } from './support'

const range = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, index) => from + index)

describe('line weights of a displaced oscillator', () => {
  it('equal the reference values (twelve digits)', () => {
    for (const row of reference.huang_rhys) {
      const mode = { energyMeV: row.hw_meV, huangRhys: row.S }
      const orders = Object.keys(row.P).map(Number)
      const found = huangRhysLineWeights(mode, row.T_K, orders)
      Object.values(row.P).forEach((value, index) =>
        expect(relativeError(found[index]!, value, 1e-4)).toBeLessThan(1e-11),
      )
      expect(relativeError(modeDebyeWallerFactor(mode, row.T_K), row.debye_waller)).toBeLessThan(1e-11)
    }
  })

  it('are the Poisson weights at 0 K', () => {
    const found = huangRhysLineWeights({ energyMeV: 4, huangRhys: 1.3 }, 0, range(-3, 8))
    let factorial = 1
    range(-3, 8).forEach((order, index) => {
      if (order > 1) factorial *= order
      const poisson = order < 0 ? 0 : (Math.exp(-1.3) * 1.3 ** order) / factorial
      expect(relativeError(found[index]!, poisson)).toBeLessThan(1e-14)
    })
  })

  it('obey detailed balance line by line: P_-m / P_m = exp(-m E / k_B T)', () => {
    for (const huangRhys of [0.01, 0.8, 20]) {
      const found = huangRhysLineWeights({ energyMeV: 3, huangRhys }, 25, [-4, 4])
      expect(relativeError(found[0]! / found[1]!, Math.exp((-4 * 3) / (0.08617333262145177 * 25)))).toBeLessThan(1e-12)
    }
  })

  it('sum to 1 with mean S and variance S(2n + 1), for any mode', () => {
    fc.assert(
      fc.property(
        logUniform(0.5, 1000),
        logUniform(1e-3, 50),
        fc.double({ min: 0, max: 600, noNaN: true }),
        (energyMeV, huangRhys, temperatureK) => {
          const n = temperatureK > 0 ? 1 / Math.expm1(energyMeV / (0.08617333262145177 * temperatureK)) : 0
          const variance = huangRhys * (2 * n + 1)
          const half = Math.ceil(30 + 12 * Math.sqrt(variance))
          const orders = range(Math.floor(huangRhys) - half, Math.ceil(huangRhys) + half)
          const found = huangRhysLineWeights({ energyMeV, huangRhys }, temperatureK, orders)
          const moment = (power: number) =>
            orders.reduce((sum, order, index) => sum + (order - huangRhys) ** power * found[index]!, 0)
          return (
            relativeError(moment(0), 1) < 1e-11 &&
            Math.abs(moment(1)) < 1e-10 * Math.sqrt(variance + 1) &&
            relativeError(moment(2), variance, 1e-3) < 1e-10
          )
        },
      ),
      { numRuns: 200 },
    )
  })

  it('stay finite at the ends of the ranges', () => {
    const found = huangRhysLineWeights({ energyMeV: 1e-3, huangRhys: 50 }, 600, [-5000, 0, 50, 5000])
    expect(found.every((value) => value > 0 && value < 1)).toBe(true)
    expect(modeZeroPhononWeight({ energyMeV: 1e-3, huangRhys: 0 }, 600)).toBe(1)
    expect(huangRhysLineWeights({ energyMeV: 1000, huangRhys: 1e-300 }, 1e-3, [-3, 0, 3])).toEqual(
      Float64Array.of(0, 1, 0),
    )
  })
})
