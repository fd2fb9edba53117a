/**
 * Physical constants in the house's units (meV, ps, K, nm), derived from the exact values that define the SI since 2019.
 *
 * Source: The International System of Units, 9th edition (2019), section 2.2; the numbers agree with CODATA 2018 and
 * 2022 (Tiesinga, Mohr, Newell, Taylor), whose uncertainty is zero for all of them.
 */

/** Exact defining constants, SI units. */
export const SI = {
  planckJS: 6.62607015e-34,
  elementaryChargeC: 1.602176634e-19,
  boltzmannJPerK: 1.380649e-23,
  lightSpeedMPerS: 299792458,
  /** Vacuum permittivity (CODATA 2022); not exact since 2019, relative uncertainty 1.6e-10. */
  vacuumPermittivityFPerM: 8.8541878188e-12,
} as const

const MEV_PER_EV = 1e3
const PS_PER_S = 1e12
const NM_PER_M = 1e9

/** Reduced Planck constant, meV ps. */
export const HBAR_MEV_PS = (SI.planckJS / (2 * Math.PI) / SI.elementaryChargeC) * MEV_PER_EV * PS_PER_S

/** Planck constant, meV ps. */
export const PLANCK_MEV_PS = (SI.planckJS / SI.elementaryChargeC) * MEV_PER_EV * PS_PER_S

/** Boltzmann constant, meV/K. */
export const BOLTZMANN_MEV_PER_K = (SI.boltzmannJPerK / SI.elementaryChargeC) * MEV_PER_EV

/** h c, meV nm: photon energy = HC_MEV_NM / vacuum wavelength. */
export const HC_MEV_NM = ((SI.planckJS * SI.lightSpeedMPerS) / SI.elementaryChargeC) * MEV_PER_EV * NM_PER_M

/** Full width at half maximum of a Gaussian over its standard deviation, 2 sqrt(2 ln 2). */
export const GAUSSIAN_FWHM_PER_SIGMA = 2 * Math.sqrt(2 * Math.LN2)

/** Angular frequency (rad/ps) of an energy (meV). */
export const angularFrequencyOf = (energyMeV: number): number => energyMeV / HBAR_MEV_PS

/** Below this temperature (K) nothing differs from 0 K within any time the engine takes: k_B T t / hbar < 1e-9 at 1e7 ps. */
const COLDEST_K = 1e-15

/** Thermal angular frequency k_B T / hbar, rad/ps; 0 at (and closer than 1e-15 K to) absolute zero. */
export const thermalFrequencyOf = (temperatureK: number): number =>
  temperatureK < COLDEST_K ? 0 : (BOLTZMANN_MEV_PER_K * temperatureK) / HBAR_MEV_PS

/** Bose-Einstein occupation 1 / (exp(E / k_B T) - 1); 0 at T = 0. */
export const occupationOf = (energyMeV: number, temperatureK: number): number =>
  temperatureK > 0 ? 1 / Math.expm1(energyMeV / (BOLTZMANN_MEV_PER_K * temperatureK)) : 0
