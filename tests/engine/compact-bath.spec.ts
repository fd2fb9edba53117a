import { describe, expect, it } from 'vitest'
import { moments, zeroPhononWeight } from '../../shared/engine/bath-integrals'
import { lineBroadening, lineBroadeningAt } from '../../shared/engine/line-broadening'
import { spectralDensity } from '../../shared/engine/spectral-density'
import {
  BathTermSchema,
  type BathTerm,
  type ConfinedExcitonTerm,
  type LogNormalTerm,
} from '../../shared/schemas/parameter-set'
import fixture from './reference/compact-broadening.json'
import { relativeError } from './support'

const logNormal = (huangRhys: number, energyMeV: number, relativeWidth: number): LogNormalTerm => ({
  kind: 'logNormal',
  huangRhys,
  energyMeV,
  relativeWidth,
})

const exciton: ConfinedExcitonTerm = {
  kind: 'confinedExciton',
  densityKgPerM3: 5317,
  longitudinalVelocityMPerS: 5088,
  transverseVelocityMPerS: 2963,
  electronShiftEV: -7,
  holeShiftEV: 3.5,
  electronLengthNm: 4,
  holeLengthNm: 3.5,
  piezoCoefficientCPerM2: 0.16,
  relativePermittivity: 12.9,
}

const alone = (term: BathTerm) => ({ bath: [term], modes: [] })

describe('log-normal sideband and confined exciton', () => {
  it('equal mpmath quadrature of the definition within 1e-12', () => {
    expect(fixture.cases).toHaveLength(8)
    for (const { term, temperatureK, timesPs, re, im } of fixture.cases) {
      const found = lineBroadeningAt(alone(BathTermSchema.parse(term)), temperatureK, Float64Array.from(timesPs))
      timesPs.forEach((time, index) => {
        const where = `${JSON.stringify(term)}, ${temperatureK} K, ${time} ps`
        const size = Math.hypot(re[index]!, im[index]!)
        expect(relativeError(found.re[index]!, re[index]!, 1e-2 * size), where).toBeLessThan(1e-12)
        expect(relativeError(found.im[index]!, im[index]!, 1e-2 * size), where).toBeLessThan(1e-12)
      })
    }
  })

  for (const term of [logNormal(1, 26, 0.01), logNormal(0.5, 12, 0.1), logNormal(0.3, 4, 0.5), exciton]) {
    for (const temperatureK of [0, 300]) {
      it(`on a grid: ${term.kind} ${'relativeWidth' in term ? term.relativeWidth : ''}, ${temperatureK} K`, () => {
        const grid = { stepPs: 0.01, samples: 8192 }
        const whole = lineBroadening(alone(term), temperatureK, grid)
        const indices = [0, 1, 2, 7, 40, 41, 300, 2000, 5001, 8191]
        const single = lineBroadeningAt(
          alone(term),
          temperatureK,
          Float64Array.from(indices, (index) => index * grid.stepPs),
        )
        indices.forEach((index, k) => {
          const error = Math.hypot(whole.re[index]! - single.re[k]!, whole.im[index]! - single.im[k]!)
          expect(error / Math.max(1, Math.hypot(single.re[k]!, single.im[k]!))).toBeLessThanOrEqual(whole.errorEstimate)
        })
        expect(whole.errorEstimate).toBeLessThan(1e-10)
        expect(whole.re.every((value) => value > -1e-12)).toBe(true)
      })
    }
  }

  it('far from t = 0 the Fourier sums serve as well', () => {
    const times = Float64Array.from({ length: 600 }, (_, index) => 40 + 0.02 * index)
    const many = lineBroadeningAt(alone(logNormal(1, 26, 0.01)), 77, times)
    expect(many.method).toContain('non-uniform Fourier transform')
    const few = lineBroadeningAt(alone(logNormal(1, 26, 0.01)), 77, times.subarray(100, 110))
    few.re.forEach((value, index) => expect(relativeError(many.re[100 + index]!, value)).toBeLessThan(1e-11))
  })
})

describe('log-normal sideband', () => {
  it('has lambda = S E e^{s^2/2}, third moment S E^3 e^{9 s^2/2} and the weight e^{-S} at 0 K', () => {
    for (const s of [0.01, 0.3, 1]) {
      const phonons = alone(logNormal(0.7, 5, s))
      const found = moments(phonons, 0)
      expect(relativeError(found.reorganizationEnergyMeV, 0.7 * 5 * Math.exp((s * s) / 2))).toBeLessThan(1e-13)
      expect(relativeError(found.varianceMeV2!, 0.7 * 25 * Math.exp(2 * s * s))).toBeLessThan(1e-13)
      expect(relativeError(found.thirdCentralMomentAbsorptionMeV3!, 0.7 * 125 * Math.exp(4.5 * s * s))).toBeLessThan(
        1e-12,
      )
      expect(relativeError(zeroPhononWeight(phonons, 0).weight!, Math.exp(-0.7))).toBeLessThan(1e-13)
    }
  })
})

describe('confined exciton', () => {
  it('starts as w^3 with the contrast of the deformation potentials, and as w^5 without', () => {
    const slope = (term: ConfinedExcitonTerm) => {
      const [a, b] = spectralDensity([term], Float64Array.of(1e-4, 2e-4))
      return Math.log2(b! / a!)
    }
    expect(slope(exciton)).toBeCloseTo(3, 3)
    expect(slope({ ...exciton, electronShiftEV: 0, holeShiftEV: 0 })).toBeCloseTo(5, 3)
    expect(slope({ ...exciton, holeShiftEV: -7, piezoCoefficientCPerM2: 0 })).toBeCloseTo(7, 3)
  })

  it('reduces to one Gaussian power law when electron and hole are alike but for their sign', () => {
    // D^2 = (D_e - D_h)^2, cutoff sqrt(2) v / a: hbar w_c = 1.184 meV for 4 nm.
    const term = { ...exciton, holeLengthNm: 4, piezoCoefficientCPerM2: 0 }
    const cutoffEnergyMeV = ((0.6582119569509066 * Math.SQRT2 * 5088) / 4) * 1e-3
    const [peak] = spectralDensity([term], Float64Array.of(cutoffEnergyMeV))
    const couplingStrength = (peak! * Math.E) / (Math.PI * cutoffEnergyMeV)
    const times = Float64Array.of(0.01, 0.3, 4)
    const a = lineBroadeningAt(alone(term), 30, times)
    const b = lineBroadeningAt(
      alone({ kind: 'powerLaw', couplingStrength, exponent: 3, cutoffEnergyMeV, cutoffShape: 'gaussian' }),
      30,
      times,
    )
    times.forEach((_, index) => expect(relativeError(a.re[index]!, b.re[index]!)).toBeLessThan(1e-12))
  })

  it('is silent when electron and hole move alike', () => {
    const term = { ...exciton, holeLengthNm: 4, holeShiftEV: -7 }
    expect(spectralDensity([term], Float64Array.of(1, 2))).toEqual(Float64Array.of(0, 0))
    expect(zeroPhononWeight(alone(term), 300).weight).toBe(1)
  })
})
