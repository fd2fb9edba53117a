import { describe, expect, it } from 'vitest'
import {
  debyeWallerFactor,
  moments,
  reorganizationEnergyMeV,
  thermalWidthMeV,
  zeroPhononWeight,
} from '../../shared/engine/bath-integrals'
import { BOLTZMANN_MEV_PER_K } from '../../shared/engine/constants'
import { gamma } from '../../shared/engine/gamma'
import { lineBroadeningAt } from '../../shared/engine/line-broadening'
import { spectralDensity } from '../../shared/engine/spectral-density'
import type { PowerLawTerm } from '../../shared/schemas/parameter-set'
import fixture from './reference/bath-integrals.json'
import { powerLaw, relativeError } from './support'

const alone = (term: PowerLawTerm) => ({ bath: [term], modes: [] })

describe('integrals over power-law baths against mpmath quadrature', () => {
  it('reorganisation energy, plateau, variance and third moment within 1e-13', () => {
    expect(fixture.cases.length).toBeGreaterThan(60)
    for (const {
      temperatureK,
      reorganizationEnergyMeV: lambda,
      plateau,
      varianceMeV2,
      thirdMeV3,
      ...rest
    } of fixture.cases) {
      const phonons = alone(powerLaw({ ...rest, cutoffShape: rest.cutoffShape as 'gaussian' }))
      const where = JSON.stringify({ ...rest, temperatureK })
      const found = moments(phonons, temperatureK)
      expect(relativeError(reorganizationEnergyMeV(phonons), lambda), where).toBeLessThan(1e-13)
      expect(relativeError(found.varianceMeV2!, varianceMeV2), where).toBeLessThan(1e-13)
      expect(relativeError(found.thirdCentralMomentAbsorptionMeV3!, thirdMeV3), where).toBeLessThan(1e-13)
      const { exponentOfContinuousBath } = zeroPhononWeight(phonons, temperatureK)
      if (plateau === null) expect(exponentOfContinuousBath, where).toBeNull()
      // p = 2.02 ends in a power w^0.02 at the lower limit, whose last digits are lost in both.
      else expect(relativeError(exponentOfContinuousBath!, plateau), where).toBeLessThan(1e-12)
    }
  })

  it('reorganisation energy is a hbar w_c Gamma(p/q)/q', () => {
    for (const exponent of [0.1, 0.5, 1, 3, 5.5]) {
      for (const [cutoffShape, q] of [
        ['gaussian', 2],
        ['exponential', 1],
      ] as const) {
        const found = reorganizationEnergyMeV(alone(powerLaw({ exponent, cutoffShape })))
        expect(relativeError(found, (0.5 * 2 * gamma(exponent / q)) / q)).toBeLessThan(1e-13)
      }
    }
  })
})

describe('zero-phonon weight', () => {
  it('is where Re g0 ends', () => {
    const phonons = alone(powerLaw())
    const end = lineBroadeningAt(phonons, 40, Float64Array.of(900)).re[0]!
    expect(relativeError(zeroPhononWeight(phonons, 40).weight!, Math.exp(-end))).toBeLessThan(1e-9)
  })

  it('needs p > 2, at 0 K p > 1', () => {
    const weightAt = (exponent: number, temperatureK: number) =>
      zeroPhononWeight(alone(powerLaw({ exponent })), temperatureK).weight
    expect(weightAt(2, 4)).toBeNull()
    expect(weightAt(2.1, 4)).toBeGreaterThan(0)
    expect(weightAt(1, 0)).toBeNull()
    expect(weightAt(1.1, 0)).toBeGreaterThan(0)
  })

  it('is replaced by the thermal width where J is linear at low energy', () => {
    const phonons = alone(powerLaw({ exponent: 1, couplingStrength: 0.02 }))
    const found = zeroPhononWeight(phonons, 300)
    expect(found.weight).toBeNull()
    expect(found.debyeWallerFactor).toBeNull()
    // 2 pi a k_B T: the slope of Re g0 times 2 hbar.
    expect(relativeError(found.thermalWidthMeV!, 2 * Math.PI * 0.02 * BOLTZMANN_MEV_PER_K * 300)).toBeLessThan(1e-14)
    expect(found.reason).toContain('bath.0 grows as E^1')
    const [early, late] = lineBroadeningAt(phonons, 300, Float64Array.of(40, 50)).re
    expect(relativeError(((late! - early!) / 10) * 2 * 0.6582119569509066, found.thermalWidthMeV!)).toBeLessThan(1e-9)
  })

  it('has no thermal width at 0 K, nor for a sub-ohmic bath', () => {
    expect(zeroPhononWeight(alone(powerLaw({ exponent: 1 })), 0).thermalWidthMeV).toBeNull()
    expect(zeroPhononWeight(alone(powerLaw({ exponent: 0.5 })), 10).thermalWidthMeV).toBeNull()
    expect(thermalWidthMeV(alone(powerLaw({ exponent: 0.5 })), 10)).toBe(0)
  })

  it('is 1 without phonons and ignores terms of zero strength', () => {
    expect(zeroPhononWeight({ bath: [], modes: [] }, 300).weight).toBe(1)
    expect(zeroPhononWeight(alone(powerLaw({ exponent: 1, couplingStrength: 0 })), 300).weight).toBe(1)
  })

  it('is not the Debye-Waller factor when a mode is warm', () => {
    const phonons = { bath: [], modes: [{ label: '', energyMeV: 26, huangRhys: 1 }] }
    expect(debyeWallerFactor(phonons, 300)!).toBeLessThan(0.5 * zeroPhononWeight(phonons, 300).weight!)
    expect(debyeWallerFactor(phonons, 0)).toBeCloseTo(Math.exp(-1), 14)
  })
})

describe('moments', () => {
  it('follow from g0 by differentiation at t = 0', () => {
    const phonons = {
      bath: [powerLaw(), powerLaw({ exponent: 1, cutoffShape: 'exponential' })],
      modes: [{ label: '', energyMeV: 3, huangRhys: 0.4 }],
    }
    const found = moments(phonons, 30)
    const h = 1e-3
    const g = lineBroadeningAt(phonons, 30, Float64Array.of(h, 2 * h))
    const hbar = 0.6582119569509066
    // Im g0 = (lambda/hbar) t - third t^3/6, Re g0 = variance t^2/2 + O(t^4): two times eliminate the next order.
    expect(relativeError((hbar * (8 * g.im[0]! - g.im[1]!)) / (6 * h), found.reorganizationEnergyMeV)).toBeLessThan(
      1e-8,
    )
    expect(
      relativeError((hbar ** 2 * 2 * (16 * g.re[0]! - g.re[1]!)) / (12 * h * h), found.varianceMeV2!),
    ).toBeLessThan(1e-8)
    const third = (hbar ** 3 * 6 * (g.im[0]! - (found.reorganizationEnergyMeV / hbar) * h)) / -(h ** 3)
    expect(relativeError(third, found.thirdCentralMomentAbsorptionMeV3!)).toBeLessThan(1e-3)
  })

  it('add the variance of the ensemble and turn sign between absorption and fluorescence', () => {
    const phonons = alone(powerLaw())
    const [bare, broad] = [moments(phonons, 10), moments(phonons, 10, 2.3548200450309493)]
    expect(broad.varianceMeV2! - bare.varianceMeV2!).toBeCloseTo(1, 12)
    expect(bare.firstMomentFluorescenceMeV).toBe(-bare.firstMomentAbsorptionMeV)
    expect(bare.thirdCentralMomentFluorescenceMeV3).toBe(-bare.thirdCentralMomentAbsorptionMeV3!)
  })
})

describe('spectral density', () => {
  it('is hbar J in meV, zero at E <= 0, and its integral over E gives lambda', () => {
    const term = powerLaw({ couplingStrength: 0.3, cutoffEnergyMeV: 1.5 })
    const energies = Float64Array.from({ length: 4001 }, (_, index) => index * 0.0025)
    const density = spectralDensity([term], energies)
    expect(density[0]).toBe(0)
    expect(spectralDensity([term], Float64Array.of(-1))[0]).toBe(0)
    // pi a E^3 E_c^-2 exp(-(E/E_c)^2) at E = E_c.
    expect(relativeError(density[600]!, (Math.PI * 0.3 * 1.5) / Math.E)).toBeLessThan(1e-13)
    const lambda = energies.reduce(
      (sum, energy, index) => (energy > 0 ? sum + (density[index]! / energy) * 0.0025 : sum),
      0,
    )
    expect(relativeError(lambda / Math.PI, reorganizationEnergyMeV(alone(term)))).toBeLessThan(1e-9)
  })
})
