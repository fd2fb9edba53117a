/**
 * Integrals over the phonons that characterise a line without computing its spectrum. Energies in meV.
 *
 *   lambda   = (hbar/pi) Int J/w dw + sum S_k E_k
 *   weight   = exp(-Re g0_continuum(infinity)) prod_k exp(-S_k (2 n_k + 1)) I_0(2 S_k sqrt(n_k (n_k + 1)))
 *   variance = (hbar^2/pi) Int J coth(hbar w / 2 k_B T) dw + sum S_k (2 n_k + 1) E_k^2 + (hbar sigma)^2
 *   third    = +/- [ (hbar^3/pi) Int J w dw + sum S_k E_k^3 ]   (+ absorption, - fluorescence)
 *
 * The zero-phonon weight exists only where Re g0 has a plateau: J ~ w^p with p > 2, at T = 0 with p > 1. Where J is linear
 * at low energy (p = 1) and T > 0, Re g0 ends as a straight line and the centre of the spectrum is a Lorentzian of full
 * width 2 k_B T J'(0): that width is given instead of a weight.
 * Source: Mukamel (1995), ch. 8; Huang & Rhys, Proc. R. Soc. A 204, 406 (1950); Krummheuer, Axt & Kuhn, Phys. Rev. B 65,
 * 195313 (2002). Accuracy 1e-10 relative or better (tests/engine/bath-integrals.spec.ts).
 */
import { densityIntegrals, toContinuum } from './bath/registry'
import { BOLTZMANN_MEV_PER_K, GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS, thermalFrequencyOf } from './constants'
import { resolveModes } from './discrete-modes'
import { modeDebyeWallerFactor, modeZeroPhononWeight } from './huang-rhys'
import type { Phonons } from './types'

export { huangRhysLineWeights } from './huang-rhys'

/** Energy between the vertical gap and the zero-phonon line, meV. */
export const reorganizationEnergyMeV = (phonons: Phonons): number =>
  phonons.bath.reduce((sum, term) => sum + HBAR_MEV_PS * densityIntegrals(term, 0).reorganization, 0) +
  phonons.modes.reduce((sum, mode) => sum + mode.huangRhys * mode.energyMeV, 0)

/**
 * Full width at half maximum (meV) that the continuum gives the centre of the line at this temperature, the sum of
 * 2 k_B T J'(0) over the terms that are linear at low energy; 0 when no term is.
 */
export const thermalWidthMeV = (phonons: Phonons, temperatureK: number): number =>
  2 *
  BOLTZMANN_MEV_PER_K *
  temperatureK *
  phonons.bath.reduce((sum, term) => {
    const { exponent, coefficient } = toContinuum(term).low
    return exponent === 1 ? sum + coefficient : sum
  }, 0)

export interface ZeroPhononWeight {
  /** Share of the spectrum in the zero-phonon line; null when the line has no finite share. */
  weight: number | null
  /** exp(-Re g0_continuum(infinity)) prod_k exp(-S_k (2 n_k + 1)); null with the weight. */
  debyeWallerFactor: number | null
  /** Re g0(infinity) of the continuous bath; null when it has no plateau. */
  exponentOfContinuousBath: number | null
  /** Where the weight is null and a term is linear at low energy (T > 0): the width of the centre of the line. */
  thermalWidthMeV: number | null
  /** Why there is no weight; empty when there is. */
  reason: string
}

/** Whether a term has zero strength: its low-energy law then says nothing. */
const isSilent = (coefficient: number): boolean => !(coefficient > 0)

export const zeroPhononWeight = (phonons: Phonons, temperatureK: number): ZeroPhononWeight => {
  const th = thermalFrequencyOf(temperatureK)
  let exponent = 0
  for (const [index, term] of phonons.bath.entries()) {
    const { low } = toContinuum(term)
    const { plateau } = densityIntegrals(term, th)
    if (plateau === null && !isSilent(low.coefficient)) {
      const width = thermalWidthMeV(phonons, temperatureK)
      return {
        weight: null,
        debyeWallerFactor: null,
        exponentOfContinuousBath: null,
        thermalWidthMeV: width > 0 ? width : null,
        reason:
          `no finite zero-phonon weight: bath.${index} grows as E^${Number(low.exponent.toPrecision(4))} at low energy, ` +
          `and a weight needs an exponent above ${th > 0 ? '2 at this temperature' : '1 at 0 K'}`,
      }
    }
    exponent += plateau ?? 0
  }
  const continuum = Math.exp(-exponent)
  const product = (factor: typeof modeZeroPhononWeight): number =>
    phonons.modes.reduce((value, mode) => value * factor(mode, temperatureK), continuum)
  return {
    weight: product(modeZeroPhononWeight),
    debyeWallerFactor: product(modeDebyeWallerFactor),
    exponentOfContinuousBath: exponent,
    thermalWidthMeV: null,
    reason: '',
  }
}

/** The Debye-Waller factor alone; null when it does not exist. Not the share of the zero-phonon line: see the weight. */
export const debyeWallerFactor = (phonons: Phonons, temperatureK: number): number | null =>
  zeroPhononWeight(phonons, temperatureK).debyeWallerFactor

/** Moments of the spectra without homogeneous width and without prefactors; first moments about E0, the others central. */
export interface SpectralMoments {
  reorganizationEnergyMeV: number
  firstMomentAbsorptionMeV: number
  firstMomentFluorescenceMeV: number
  /** null where the integral diverges (a Lorentzian tail). */
  varianceMeV2: number | null
  thirdCentralMomentAbsorptionMeV3: number | null
  thirdCentralMomentFluorescenceMeV3: number | null
}

export const moments = (phonons: Phonons, temperatureK: number, ensembleFwhmMeV = 0): SpectralMoments => {
  const th = thermalFrequencyOf(temperatureK)
  const sigma = ensembleFwhmMeV / GAUSSIAN_FWHM_PER_SIGMA
  let lambda = 0
  let variance: number | null = sigma * sigma
  let third: number | null = 0
  for (const term of phonons.bath) {
    const integrals = densityIntegrals(term, th)
    lambda += HBAR_MEV_PS * integrals.reorganization
    variance =
      variance === null || integrals.variance === null ? null : variance + HBAR_MEV_PS ** 2 * integrals.variance
    third = third === null || integrals.third === null ? null : third + HBAR_MEV_PS ** 3 * integrals.third
  }
  for (const { frequency, huangRhys, thermalHuangRhys } of resolveModes(phonons.modes, temperatureK)) {
    const energy = HBAR_MEV_PS * frequency
    lambda += huangRhys * energy
    if (variance !== null) variance += thermalHuangRhys * energy ** 2
    if (third !== null) third += huangRhys * energy ** 3
  }
  return {
    reorganizationEnergyMeV: lambda,
    firstMomentAbsorptionMeV: lambda,
    firstMomentFluorescenceMeV: -lambda,
    varianceMeV2: variance,
    thirdCentralMomentAbsorptionMeV3: third,
    thirdCentralMomentFluorescenceMeV3: third === null ? null : -third,
  }
}
