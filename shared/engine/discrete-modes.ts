/**
 * Discrete vibrational modes of a displaced oscillator.
 *
 *   g0(t) = sum_k S_k [ (2 n_k + 1) (1 - cos w_k t) + i sin w_k t ],  n_k = 1/(exp(hbar w_k / k_B T) - 1)
 *
 * Source: Huang & Rhys, Proc. R. Soc. A 204, 406 (1950); Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8.
 * 1 - cos is formed as 2 sin^2(wt/2), so that small times keep full relative accuracy.
 */
import type { Mode } from '../schemas/parameter-set'
import { angularFrequencyOf, occupationOf } from './constants'
import type { TimeGrid } from './types'

export interface ResolvedMode {
  /** rad/ps */
  frequency: number
  huangRhys: number
  /** S (2 n + 1) */
  thermalHuangRhys: number
}

export const resolveModes = (modes: readonly Mode[], temperatureK: number): ResolvedMode[] =>
  modes
    .filter((mode) => mode.huangRhys > 0)
    .map(({ energyMeV, huangRhys }) => ({
      frequency: angularFrequencyOf(energyMeV),
      huangRhys,
      thermalHuangRhys: huangRhys * (2 * occupationOf(energyMeV, temperatureK) + 1),
    }))

/**
 * Rounding error of the modes' g0 up to a time, relative to max(1, |g0|): a phase wt is known to 2^-53 wt, and with
 * A = S(2n + 1) the slope A sin(wt) is at most sqrt(2A) times max(1, A (1 - cos wt)) for A > 1/2.
 */
export const modesErrorEstimate = (modes: readonly ResolvedMode[], longestPs: number): number =>
  modes.reduce(
    (sum, { frequency, thermalHuangRhys: a }) =>
      sum + 2 * Number.EPSILON * Math.max(1, frequency * longestPs) * (a > 0.5 ? Math.sqrt(2 * a) : a),
    0,
  )

/** Adds the modes' g0 at the times to re and im. */
export const addModesAt = (
  modes: readonly ResolvedMode[],
  timesPs: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void => {
  for (const { frequency, huangRhys, thermalHuangRhys } of modes) {
    for (let index = 0; index < timesPs.length; index++) {
      const phase = frequency * timesPs[index]!
      const s = Math.sin(phase / 2)
      re[index]! += 2 * thermalHuangRhys * s * s
      im[index]! += huangRhys * Math.sin(phase)
    }
  }
}

/** Steps after which the rotation starts anew from sin and cos: its rounding then stays below 2e-15. */
const RESYNCHRONISE = 64

/** The same on a uniform grid, by rotating (cos, sin) of half the phase from step to step. */
export const addModesOnGrid = (
  modes: readonly ResolvedMode[],
  grid: TimeGrid,
  re: Float64Array,
  im: Float64Array,
): void => {
  for (const { frequency, huangRhys, thermalHuangRhys } of modes) {
    const half = (frequency * grid.stepPs) / 2
    const cosStep = Math.cos(half)
    const sinStep = Math.sin(half)
    for (let block = 0; block < grid.samples; block += RESYNCHRONISE) {
      const phase = (frequency * (block * grid.stepPs)) / 2
      let c = Math.cos(phase)
      let s = Math.sin(phase)
      const stop = Math.min(block + RESYNCHRONISE, grid.samples)
      for (let index = block; index < stop; index++) {
        re[index]! += 2 * thermalHuangRhys * s * s
        im[index]! += 2 * huangRhys * s * c
        const next = c * cosStep - s * sinStep
        s = s * cosStep + c * sinStep
        c = next
      }
    }
  }
}
