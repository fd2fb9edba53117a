/**
 * Log-normal sideband: one vibration spread over a range of energies.
 *
 *   J(w) = S w sqrt(pi/2)/s exp(-ln^2(w/w_0) / (2 s^2)),  so that J/(pi w^2) is S times a log-normal density
 *
 * | symbol | variable | unit |
 * | S | huangRhys | 1 |
 * | hbar w_0 | energyMeV, the median | meV |
 * | s | relativeWidth | 1 |
 *
 * lambda/hbar = S w_0 e^{s^2/2}; Re g0(infinity) = S at T = 0. J falls faster than any power at low energy, so the
 * zero-phonon weight exists at every temperature.
 * Source: normalisation of the log-normal density (Johnson, Kotz & Balakrishnan, Continuous Univariate Distributions 1
 * (1994), ch. 14). Accuracy: 1e-12 relative to max(1, |g0|) (tests/engine/compact-bath.spec.ts).
 */
import type { LogNormalTerm } from '../../schemas/parameter-set'
import { angularFrequencyOf } from '../constants'
import type { Continuum } from './continuum'

/** e^{-x^2/2} < 1e-18 beyond this many widths. */
const WIDTHS = 9.2

export const logNormalContinuum = (term: LogNormalTerm): Continuum => {
  const { huangRhys, relativeWidth } = term
  const median = angularFrequencyOf(term.energyMeV)
  const scale = (huangRhys * Math.sqrt(Math.PI / 2)) / relativeWidth
  // w^-2 of the hot plateau moves the lower end by 2 s^2, w^3 of the third moment the upper end by 3 s^2.
  const lower = median * Math.exp(-relativeWidth * (WIDTHS + 2 * relativeWidth))
  const upper = median * Math.exp(relativeWidth * (WIDTHS + 3 * relativeWidth))
  return {
    silent: huangRhys === 0,
    density: (w) => {
      const widths = Math.log(w / median) / relativeWidth
      // Far out the value would be subnormal, on which processors are slow.
      return Math.abs(widths) > 25 ? 0 : scale * w * Math.exp((-widths * widths) / 2)
    },
    low: { exponent: Infinity, coefficient: 0 },
    lowScale: lower,
    upper,
    reach: upper,
    panelWidth: (start) => (start < lower ? Infinity : start * Math.expm1(2 * relativeWidth)),
    breaks: Float64Array.of(lower),
    firstTime: 1 / upper,
    ringing: { frequency: median, until: WIDTHS / (relativeWidth * median) },
  }
}
