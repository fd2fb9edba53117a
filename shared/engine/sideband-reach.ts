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
 * reach by less. Cost: about 200 exponentials per bath term and s. Spec: tests/engine/sideband-reach.spec.ts.
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

/** Phonon energies (meV) with the weights of cosh - 1 and of sinh. */
const spectralLines = (model: LineModel) => {
  const energies: number[] = []
  const even: number[] = []
  const odd: number[] = []
  const th = thermalFrequencyOf(model.temperatureK)
  for (const term of model.bath) {
    const { density, lowScale, reach } = toContinuum(term)
    const from = Math.log(lowScale * 1e-5)
    const count = Math.ceil((Math.log(reach) - from) * POINTS_PER_E)
    const step = (Math.log(reach) - from) / count
    for (let i = 0; i <= count; i++) {
      const w = Math.exp(from + i * step)
      const weight = (density(w) / (Math.PI * w)) * step * (i === count ? 0.5 : 1)
      energies.push(w * HBAR_MEV_PS)
      odd.push(weight)
      even.push(th > 0 ? weight / Math.tanh(w / (2 * th)) : weight)
    }
  }
  for (const mode of resolveModes(model.modes, model.temperatureK)) {
    energies.push(mode.frequency * HBAR_MEV_PS)
    odd.push(mode.huangRhys)
    even.push(mode.thermalHuangRhys)
  }
  return { energies: Float64Array.from(energies), even: Float64Array.from(even), odd: Float64Array.from(odd) }
}

export const sidebandReach = (model: LineModel): SidebandReach => {
  const { energies, even, odd } = spectralLines(model)
  const sigma = model.ensembleFwhmMeV / GAUSSIAN_FWHM_PER_SIGMA
  const scale = Math.max(
    energies.reduce((a, b) => Math.max(a, b), 0),
    sigma,
  )
  if (!(scale > 0)) return { above: () => 0, below: () => 0 }

  const slopes: number[] = []
  const upper: number[] = []
  const lower: number[] = []
  for (let k = -10 * OCTAVE_STEPS; k <= 5 * OCTAVE_STEPS; k++) {
    const s = 2 ** (k / OCTAVE_STEPS) / scale
    let symmetric = 0
    let skew = 0
    for (let i = 0; i < energies.length; i++) {
      const grown = Math.exp(energies[i]! * s)
      const half = Math.expm1((energies[i]! * s) / 2)
      // cosh x - 1 = (e^{x/2} - 1)^2 (e^{x/2} + 1)^2 / (2 e^x), free of cancellation.
      const cosh = (half * half * (half + 2) * (half + 2)) / (2 * grown)
      symmetric += even[i]! * cosh
      skew += odd[i]! * (grown - 1 / grown) * 0.5
    }
    const gaussian = (sigma * s * sigma * s) / 2
    slopes.push(s)
    upper.push(symmetric + skew + gaussian)
    lower.push(symmetric - skew + gaussian)
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
