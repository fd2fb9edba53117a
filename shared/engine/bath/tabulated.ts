/**
 * Spectral density given as a table.
 *
 *   hbar J(E): monotone cubic through the points; J_1 (E/E_1)^p below the first point; 0 above the last
 *
 * | symbol | variable | unit |
 * | E_i | energiesMeV, ascending | meV |
 * | hbar J_i | densityMeV, >= 0 | meV |
 * | p | lowEnergyExponent | 1 |
 *
 * A point at E = 0 (which must hold 0) says nothing that p does not say, and is left out. The exponent is an assumption
 * where a table ends: `lowEnergySensitivity` tells how much the zero-phonon weight rests on it.
 * Source: Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5, 300 (1984) for the interpolation. Accuracy of g0: 1e-12 of max(1, |g0|) (tests/engine/tabulated-bath.spec.ts).
 */
import type { TabulatedTerm } from '../../schemas/parameter-set'
import { angularFrequencyOf } from '../constants'
import { monotoneCubic } from '../monotone-cubic'
import type { Continuum } from './continuum'

export const tabulatedContinuum = (term: TabulatedTerm): Continuum => {
  const begin = term.energiesMeV[0] === 0 ? 1 : 0
  const frequencies = Float64Array.from(term.energiesMeV.slice(begin), angularFrequencyOf)
  const values = Float64Array.from(term.densityMeV.slice(begin), angularFrequencyOf)
  const inside = monotoneCubic(frequencies, values)
  const first = frequencies[0]!
  const last = frequencies.at(-1)!
  const exponent = term.lowEnergyExponent
  const silent = values.every((value) => value === 0)
  return {
    silent,
    density: (w) => (w < first ? values[0]! * Math.pow(w / first, exponent) : w <= last ? inside(w) : 0),
    low: { exponent, coefficient: values[0]! * Math.pow(first, -exponent) },
    lowScale: first,
    upper: last,
    reach: last,
    panelWidth: () => Infinity,
    firstTime: 2 / last,
    // The second derivative jumps at every point: g0 keeps ringing at all table frequencies.
    ringing: { frequency: last, until: Infinity },
    breaks: frequencies,
  }
}
