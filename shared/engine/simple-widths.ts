/**
 * Full widths at half maximum of the line shapes that need no bath.
 *
 *   Lorentzian  2 hbar / T2
 *   Voigt       convolution of a Lorentzian and a Gaussian, w(z) at z = (E + i G_L/2) / (sqrt2 s)
 *   Kubo        Re Int_0^inf dt exp(i w t - D^2 tc^2 [exp(-t/tc) + t/tc - 1]), a classical bath without Stokes shift
 *
 * The Kubo line is evaluated by its continued fraction 1/(-iw + D^2/(-iw + 1/tc + 2 D^2/(-iw + 2/tc + ...))), which has no
 * cancellation at any D tc. Sources: Kubo, J. Phys. Soc. Jpn 17, 1100 (1962); Mori, Prog. Theor. Phys. 34, 399 (1965) for
 * the fraction (from memory). Accuracy 1e-10 relative (tests/engine/simple-widths.spec.ts).
 */
import { GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS } from './constants'
import { faddeeva } from './faddeeva'

/** Width (meV) of a coherence that decays as exp(-t/T2). */
export const lorentzianFwhm = (coherenceTimePs: number): number => (2 * HBAR_MEV_PS) / coherenceTimePs

/** Half width where a falling, symmetric line reaches half of its value at 0; `bound` lies beyond it. */
const halfWidth = (line: (x: number) => number, bound: number): number => {
  const half = line(0) / 2
  let low = 0
  let high = bound
  for (let step = 0; step < 200; step++) {
    const middle = (low + high) / 2
    if (middle === low || middle === high) break
    if (line(middle) > half) low = middle
    else high = middle
  }
  return (low + high) / 2
}

export const voigtFwhm = (lorentzianFwhmMeV: number, gaussianFwhmMeV: number): number => {
  if (gaussianFwhmMeV === 0) return lorentzianFwhmMeV
  const scale = (Math.SQRT2 * gaussianFwhmMeV) / GAUSSIAN_FWHM_PER_SIGMA
  const out = new Float64Array(2)
  const line = (energy: number): number => {
    faddeeva(energy / scale, lorentzianFwhmMeV / 2 / scale, out)
    return out[0]!
  }
  // The widths add at most.
  return 2 * halfWidth(line, lorentzianFwhmMeV + gaussianFwhmMeV)
}

export interface KuboWidth {
  fwhmMeV: number
  /** Which limit the parameters are nearer to: D tc below or above 1. */
  regime: 'fast' | 'slow'
  /** 2 D^2 tc / hbar (fast) or 2 sqrt(2 ln 2) D (slow). */
  limitFwhmMeV: number
  relativeDistanceFromLimit: number
}

/** Depth of the fraction at which n/tc outweighs D sqrt(n), with a wide margin; the rest changes nothing in the last digit. */
const depthOf = (squared: number): number => Math.ceil(60 + 40 * squared)

export const kuboFwhm = (
  fluctuationAmplitudeMeV: number,
  correlationTimePs: number,
  nearest?: 'fast' | 'slow',
): KuboWidth => {
  const d = fluctuationAmplitudeMeV / HBAR_MEV_PS
  const product = d * correlationTimePs
  const depth = Math.min(depthOf(product * product), 2_000_000)
  const line = (energy: number): number => {
    const w = energy / HBAR_MEV_PS
    let re = depth / correlationTimePs
    let im = -w
    for (let n = depth; n >= 1; n--) {
      const size = (n * d * d) / (re * re + im * im)
      const below = (n - 1) / correlationTimePs
      const nextRe = below + size * re
      im = -w - size * im
      re = nextRe
    }
    return re / (re * re + im * im)
  }
  const fast = 2 * fluctuationAmplitudeMeV * product
  const slow = GAUSSIAN_FWHM_PER_SIGMA * fluctuationAmplitudeMeV
  const regime = nearest ?? (product < 1 ? 'fast' : 'slow')
  const limitFwhmMeV = regime === 'fast' ? fast : slow
  const fwhmMeV = 2 * halfWidth(line, 1.01 * Math.min(fast, slow))
  return { fwhmMeV, regime, limitFwhmMeV, relativeDistanceFromLimit: fwhmMeV / limitFwhmMeV - 1 }
}
