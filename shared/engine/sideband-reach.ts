/**
 * How far from E0 phonons and ensemble can move intensity: a rigorous bound on the tails of the spectrum without its
 * homogeneous width.
 *
 * The spectrum P(x), x = E - E0, has the cumulant generating function
 *   K(s) = ln Int P(x) e^{s x} dx = (1/pi) Int dw J/w^2 [coth(w/2th)(cosh(hbar w s) - 1) + sinh(hbar w s)]
 *          + sum_k S_k [(2n_k+1)(cosh(E_k s) - 1) + sinh(E_k s)] + (hbar sig s)^2/2,
 * which is -g0 at the imaginary time t = -i hbar s, and for every s > 0 the mass beyond x is at most exp(K(s) - s x)
 * (Chernoff, Ann. Math. Stat. 23, 493 (1952)). The smallest bound over a table of s gives the reach. Emission is the
 * mirror image about E0.
 *
 * The integral runs on a logarithmic trapezoid of 12 points per factor e, exact to better than 1 % of K, which moves the
 * reach by less. Cost: about 200 exponentials per bath term and s. Spec: tests/engine/grid.spec.ts.
 */
import { toContinuum } from './bath/registry'
import { GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS, thermalFrequencyOf } from './constants'
import { resolveModes } from './discrete-modes'
import type { LineModel } from './types'

export interface SidebandReach {
  /** Energy above E0 (absorption) beyond which less than the fraction `mass` of the intensity lies, meV, >= 0. */
  above: (mass: number) => number
  /** The same below E0: hot sidebands and ensemble. */
  below: (mass: number) => number
}

const POINTS_PER_E = 12
const OCTAVE_STEPS = 2
/** Lower end of the axis in units of the low-energy scale. */
const LOWEST = 1e-5

/** Phonon energies (meV) with their Huang-Rhys weights S and the thermal part 2 n S. */
const spectralLines = (model: LineModel) => {
  let drift = 0
  let spread = 0
  const energies: number[] = []
  const cold: number[] = []
  const hot: number[] = []
  const th = thermalFrequencyOf(model.temperatureK)
  for (const term of model.bath) {
    const { density, low, lowScale, reach } = toContinuum(term)
    // Below the axis J = c w^p: its linear and quadratic terms in s, which p near 0 puts there almost wholly.
    const start = lowScale * LOWEST
    const below = low.coefficient > 0 ? (low.coefficient * start ** low.exponent) / low.exponent / Math.PI : 0
    drift += HBAR_MEV_PS * below
    spread += 2 * th * HBAR_MEV_PS ** 2 * below
    const from = Math.log(start)
    const count = Math.ceil((Math.log(reach) - from) * POINTS_PER_E)
    const step = (Math.log(reach) - from) / count
    for (let i = 0; i <= count; i++) {
      const w = Math.exp(from + i * step)
      const weight = (density(w) / (Math.PI * w)) * step * (i === count ? 0.5 : 1)
      if (!(weight > 0)) continue
      energies.push(w * HBAR_MEV_PS)
      cold.push(weight)
      hot.push(th > 0 ? (2 * weight) / Math.expm1(w / th) : 0)
    }
  }
  for (const mode of resolveModes(model.modes, model.temperatureK)) {
    energies.push(mode.frequency * HBAR_MEV_PS)
    cold.push(mode.huangRhys)
    hot.push(mode.thermalHuangRhys - mode.huangRhys)
  }
  return {
    energies: Float64Array.from(energies),
    cold: Float64Array.from(cold),
    hot: Float64Array.from(hot),
    drift,
    spread,
  }
}

export const sidebandReach = (model: LineModel): SidebandReach => {
  const { energies, cold, hot, drift, spread } = spectralLines(model)
  const sigma = model.ensembleFwhmMeV / GAUSSIAN_FWHM_PER_SIGMA
  const scale = Math.max(
    energies.reduce((a, b) => Math.max(a, b), 0),
    sigma,
  )
  if (!(scale > 0)) return { above: () => 0, below: () => 0 }

  const slopes: number[] = []
  const upper: number[] = []
  const lower: number[] = []
  // A cold lower tail ends at E0: its bound falls as 1/s, so s goes far.
  for (let k = -10 * OCTAVE_STEPS; k <= 12 * OCTAVE_STEPS; k++) {
    const s = 2 ** (k / OCTAVE_STEPS) / scale
    const gaussian = ((sigma * sigma + spread) * s * s) / 2
    let up = gaussian + drift * s
    let down = gaussian - drift * s
    for (let i = 0; i < energies.length; i++) {
      const rise = Math.expm1(energies[i]! * s)
      const fall = Math.expm1(-energies[i]! * s)
      // coth (cosh - 1) +- sinh = 2n (cosh - 1) + (e^{+-x} - 1), and 2 (cosh x - 1) = (e^x - 1) + (e^{-x} - 1).
      const thermal = hot[i]! > 0 ? (hot[i]! * (rise + fall)) / 2 : 0
      up += thermal + cold[i]! * rise
      down += thermal + cold[i]! * fall
    }
    slopes.push(s)
    upper.push(up)
    lower.push(down)
  }
  const reach = (cumulant: number[], mass: number): number => {
    let best = Infinity
    slopes.forEach((s, i) => {
      best = Math.min(best, (cumulant[i]! - Math.log(mass)) / s)
    })
    return Math.max(0, best)
  }
  return { above: (mass) => reach(upper, mass), below: (mass) => reach(lower, mass) }
}
