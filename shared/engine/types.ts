/**
 * Types that the modules of the engine exchange. Energies in meV, times in ps, temperatures in K, angular frequencies
 * in rad/ps. One complex layout for the house: two separate Float64Arrays, `re` and `im`.
 */

import type { BathTerm, Mode } from '../schemas/parameter-set'

export interface ComplexSeries {
  re: Float64Array
  im: Float64Array
}

/** Uniform one-sided time axis t_j = j stepPs, j = 0..samples-1. */
export interface TimeGrid {
  stepPs: number
  samples: number
}

/** The phonons: continuous terms and discrete modes. */
export interface Phonons {
  bath: readonly BathTerm[]
  modes: readonly Mode[]
}

/**
 * A set at one temperature: every width resolved to that temperature. `zeroPhononFwhmMeV` is the total homogeneous
 * width Gamma(T); gam = zeroPhononFwhmMeV / (2 hbar) contains 1/(2 T1).
 */
export interface LineModel extends Phonons {
  zeroPhononEnergyMeV: number
  temperatureK: number
  zeroPhononFwhmMeV: number
  ensembleFwhmMeV: number
  /** Infinity when there is no decay within the experiment. */
  populationLifetimePs: number
  /** Gaussian laser intensity spectrum; undefined for none (infinite bandwidth). */
  laser?: { centerMeV: number; fwhmMeV: number }
}

/** g0(t), zero-phonon referenced, dimensionless. */
export interface LineBroadening extends ComplexSeries {
  /** Estimated largest error, relative to max(1, |g0|). */
  errorEstimate: number
  /** One line: which method produced it. */
  method: string
}

/** Stop flag and progress of long work. Both optional; the engine never reads a clock. */
export interface WorkHooks {
  /** Polled between pieces of work; true stops with a `Stopped` result. */
  shouldStop?: () => boolean
  /** Fraction done, 0 to 1, never falling. */
  onProgress?: (fraction: number) => void
}
