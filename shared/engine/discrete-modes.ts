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

/** Adds the modes' g0(t) to out[0], out[1]. */
export const addModesAt = (modes: readonly ResolvedMode[], timePs: number, out: Float64Array): void => {
  for (const { frequency, huangRhys, thermalHuangRhys } of modes) {
    const s = Math.sin((frequency * timePs) / 2)
    out[0]! += 2 * thermalHuangRhys * s * s
    out[1]! += huangRhys * Math.sin(frequency * timePs)
  }
}
