/**
 * Spectral density given as a formula: hbar J in meV as a function of E in meV, for instance
 * `0.2 * E^3 / 4 * exp(-E / 2)`.
 *
 * The low-energy exponent p = lim d ln J / d ln E and the energy where J ends are found by evaluation on a logarithmic
 * axis. A formula is refused where J is negative or no number, does not vanish at E = 0 (p <= 0), or falls so slowly that
 * lambda = (hbar/pi) Int J/w dw is infinite.
 * Panels are halved until twenty Legendre polynomials hold the formula. Source of the definitions: Mukamel (1995), ch. 8.
 * Accuracy of g0: 1e-12 of max(1, |g0|) (tests/engine/expression-bath.spec.ts).
 */
import type { ExpressionTerm } from '../../schemas/parameter-set'
import { angularFrequencyOf, HBAR_MEV_PS } from '../constants'
import { buildFrequencyPanels } from '../frequency-panels'
import type { Continuum, DensityIntegrals } from './continuum'
import { compileFormula } from './formula'

/** Energies at which a formula is looked at, meV: 16 a decade. */
const LOWEST_MEV = 1e-11
const HIGHEST_MEV = 1e12
const PER_DECADE = 16

/** J ends where J/E has fallen to this share of its maximum for good: what is left is rounding in g0. */
const NEGLIGIBLE = 1e-17
/** The share of J/E that a spectrum or a figure need not show. */
const UNSEEN = 1e-7
/** J/E may rise towards 0 (p < 1): its maximum is looked for from here on. */
const OUTER_MEV = 1e-3

export interface Formula {
  densityMeV: (energyMeV: number) => number
  /** True when the formula is 0 everywhere. */
  silent: boolean
  /** Infinity where J falls faster than any power. */
  lowEnergyExponent: number
  upperMeV: number
  reachMeV: number
  /** Energy of the largest J/E. */
  peakMeV: number
}

const axis = Float64Array.from(
  { length: Math.round(Math.log10(HIGHEST_MEV / LOWEST_MEV)) * PER_DECADE + 1 },
  (_, index) => LOWEST_MEV * 10 ** (index / PER_DECADE),
)
const outerStart = axis.findIndex((energy) => energy >= OUTER_MEV)

const inWords = (value: number): string => Number(value.toPrecision(3)).toString()

/** lim d ln J / d ln E, from the two lowest decades; powers that are all but simple fractions are taken as such. */
const exponentOf = (density: (energy: number) => number): number => {
  const [near, far] = [density(LOWEST_MEV), density(100 * LOWEST_MEV)]
  if (near === 0) return Infinity
  const slope = Math.log10(far / near) / 2
  const simple = Math.round(slope * 120) / 120
  return Math.abs(slope - simple) < 1e-7 ? simple : slope
}

/** Reads and examines a formula. Throws a RangeError that says what was found and what is expected. */
export const readFormula = (text: string): Formula => {
  const densityMeV = compileFormula(text)
  const values = axis.map(densityMeV)
  const wrong = values.findIndex((value) => !(value >= 0 && value < Infinity))
  if (wrong >= 0) {
    const at = inWords(axis[wrong]!)
    throw new RangeError(
      `expected a spectral density of 0 or more at every energy; found ${values[wrong]} meV at E = ${at} meV`,
    )
  }
  const silent = values.every((value) => value === 0)
  const lowEnergyExponent = exponentOf(densityMeV)
  if (!silent && !(lowEnergyExponent > 0)) {
    throw new RangeError(
      `expected a spectral density that vanishes at E = 0 as a positive power of E; found E^${inWords(lowEnergyExponent)}`,
    )
  }
  const outer = values.subarray(outerStart).map((value, index) => value / axis[outerStart + index]!)
  const top = outer.reduce((a, b) => Math.max(a, b), 0)
  /** Index on the axis of the last point above a share of the maximum. */
  const lastAbove = (share: number): number => {
    const index = outer.findLastIndex((value) => value > share * top)
    return outerStart + Math.max(0, index)
  }
  const end = lastAbove(NEGLIGIBLE)
  if (end >= axis.length - 1) {
    throw new RangeError(
      'expected a spectral density that falls off with E, so that the reorganisation energy is finite; ' +
        `found ${inWords(values.at(-1)!)} meV still at E = ${inWords(HIGHEST_MEV)} meV`,
    )
  }
  return {
    densityMeV,
    silent,
    lowEnergyExponent,
    upperMeV: axis[end + 1]!,
    reachMeV: axis[lastAbove(UNSEEN) + 1]!,
    peakMeV: axis[outerStart + Math.max(0, outer.indexOf(top))]!,
  }
}

export const expressionContinuum = (term: ExpressionTerm): Continuum => {
  const { densityMeV, silent, lowEnergyExponent, upperMeV, reachMeV, peakMeV } = readFormula(term.formula)
  const lowest = angularFrequencyOf(LOWEST_MEV)
  const density = (w: number): number => densityMeV(w * HBAR_MEV_PS) / HBAR_MEV_PS
  const coefficient = Number.isFinite(lowEnergyExponent) ? density(lowest) * Math.pow(lowest, -lowEnergyExponent) : 0
  return {
    silent,
    density,
    low: { exponent: lowEnergyExponent, coefficient },
    lowScale: lowest * 1e7,
    upper: angularFrequencyOf(upperMeV),
    reach: angularFrequencyOf(reachMeV),
    panelWidth: () => Infinity,
    firstTime: 2 / angularFrequencyOf(peakMeV),
    needsRefinement: true,
  }
}

/** d ln J / d ln E at the far end; -Infinity where J has ended. */
const farSlope = (density: (energy: number) => number): number => {
  const [near, far] = [density(HIGHEST_MEV / 100), density(HIGHEST_MEV)]
  return far > 0 ? Math.log10(far / near) / 2 : -Infinity
}

/** Integrals to the far end of the axis, so that a slow fall of J is not cut off; null where they diverge. */
export const expressionIntegrals = (term: ExpressionTerm, th: number): DensityIntegrals => {
  const continuum = expressionContinuum(term)
  const slope = farSlope(compileFormula(term.formula))
  const upper = Number.isFinite(slope) ? angularFrequencyOf(HIGHEST_MEV) : continuum.upper
  const { integrals } = buildFrequencyPanels([{ ...continuum, upper }], th, 0)
  return {
    ...integrals,
    // Int J dw and Int J w dw need J to fall faster than w^-1 and w^-2.
    variance: slope < -1.1 ? integrals.variance : null,
    third: slope < -2.1 ? integrals.third : null,
  }
}
