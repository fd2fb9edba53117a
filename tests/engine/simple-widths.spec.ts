import { describe, expect, it } from 'vitest'
import { HBAR_MEV_PS } from '../../shared/engine/constants'
import { kuboFwhm, lorentzianFwhm, voigtFwhm } from '../../shared/engine/simple-widths'
import { relativeError } from './support'

describe('Kubo line', () => {
  // FWHM in units of D for D tc = .05, .3, 1, 3, 5: Kummer series and root finding with mpmath, 25 digits.
  it.each([
    [0.05, 0.0999993769582],
    [0.3, 0.595718267637],
    [1, 1.53754237838],
    [3, 2.07696020232],
    [5, 2.18859049673],
  ])('has the width of D tc = %d', (product, expected) => {
    expect(relativeError(kuboFwhm(1, product * HBAR_MEV_PS).fwhmMeV, expected)).toBeLessThan(1e-11)
  })

  it('goes over into its limits', () => {
    expect(kuboFwhm(1, 0.001 * HBAR_MEV_PS).relativeDistanceFromLimit).toBeCloseTo(0, 6)
    const slow = kuboFwhm(1, 200 * HBAR_MEV_PS)
    expect(slow.regime).toBe('slow')
    expect(slow.relativeDistanceFromLimit).toBeCloseTo(0, 2)
    expect(slow.limitFwhmMeV).toBeCloseTo(2.35482004503, 10)
  })
})

describe('Voigt and Lorentzian widths', () => {
  // Equal widths: exact 1.6375953596 (complementary error function of complex argument, root finding).
  it('is 1.6376 for equal widths and either width alone', () => {
    expect(voigtFwhm(1, 1)).toBeCloseTo(1.6375953596, 9)
    expect(voigtFwhm(0.7, 0)).toBe(0.7)
    expect(relativeError(voigtFwhm(0, 0.7), 0.7)).toBeLessThan(1e-12)
  })

  // Olivero & Longbothum, J. Quant. Spectrosc. Radiat. Transfer 17, 233 (1977): 0.02 % everywhere.
  it('stays within 0.03 % of the published approximation', () => {
    for (const lorentzian of [0.05, 0.3, 1, 4, 20]) {
      const approximation = 0.5346 * lorentzian + Math.sqrt(0.2166 * lorentzian ** 2 + 1)
      expect(relativeError(voigtFwhm(lorentzian, 1), approximation)).toBeLessThan(3e-4)
    }
  })

  // Common practice, no source: a coherence time of 1.36 ps is a Lorentzian of 0.968 meV, 98 fs one of 13.4 meV.
  it('translates coherence times', () => {
    expect(lorentzianFwhm(1.36)).toBeCloseTo(0.968, 3)
    expect(lorentzianFwhm(0.098)).toBeCloseTo(13.4, 1)
  })
})
