/**
 * Line-broadening function g0(t), referenced to the zero-phonon line.
 *
 *   g0(t) = (1/pi) Int_0^inf dw J(w)/w^2 [ coth(hbar w / 2 k_B T) (1 - cos wt) + i sin wt ]  + discrete modes
 *
 * | symbol | variable | unit |
 * | t | timesPs, or grid { stepPs, samples } | ps |
 * | T | temperatureK | K |
 * | g0 | re, im | 1 |
 *
 * Methods: closed forms where a kind has one, all other terms together on Legendre panels in frequency. More than a few
 * hundred times are read from piecewise polynomials in time, made from those; terms whose g0 keeps oscillating are summed
 * by a non-uniform Fourier transform on uniform times. Discrete modes are exact rotations.
 * Error: below 1e-9 max(1, |g0|) for exponents from 0.5 (1e-7 below) from 0.001 ps to 1 ns, 0 to 600 K, while Re g0 < 700;
 * measured 1e-12 (tests/engine/line-broadening.spec.ts). Cost: about 1 ms for 8192 times.
 * Source: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8; the linear term -i (lambda/hbar) t of g is
 * left out, because the engine's frame rotates at the zero-phonon energy.
 */
import type { BathTerm } from '../schemas/parameter-set'
import { toContinuum } from './bath/registry'
import { thermalFrequencyOf } from './constants'
import { continuumEvaluator } from './continuum-evaluator'
import { addOscillation, withoutOscillations } from './damped-oscillation'
import { addModesAt, addModesOnGrid, modesErrorEstimate, resolveModes, type ResolvedMode } from './discrete-modes'
import { addOscillatingTerms } from './oscillating-terms'
import { buildTimePanels } from './time-panels'
import type { LineBroadening, Phonons, TimeGrid } from './types'
import type { UniformTimes } from './uniform-sums'

/** Fewer times than this are evaluated one by one. */
const FEW_TIMES = 300
/** Phase of the ringing up to which polynomials in time, some ten radians each, are the cheaper way. */
const POLYNOMIAL_PHASE = 120
/** Above it the sums would need tens of millions of nodes: times are then evaluated one by one. */
const LARGEST_PHASE = 2e7

type Account = Pick<LineBroadening, 'errorEstimate' | 'method'>

interface TimeRange {
  /** Smallest time above 0, and the largest. */
  start: number
  end: number
  uniform: UniformTimes | undefined
}

const rangeOf = (times: Float64Array): TimeRange => {
  let start = Infinity
  let end = 0
  for (const time of times) {
    if (time > 0) start = Math.min(start, time)
    end = Math.max(end, time)
  }
  const stepPs = times.length > 1 ? (times[times.length - 1]! - times[0]!) / (times.length - 1) : 0
  // Rounding of j dt: a phase wt then moves by no more than the rounding of t itself.
  const isUniform = stepPs > 0 && times.every((time, j) => Math.abs(time - times[0]! - j * stepPs) <= 4e-16 * end)
  return { start, end, uniform: isUniform ? { startPs: times[0]!, stepPs, samples: times.length } : undefined }
}

/** Adds terms whose g0 is smooth in the time (or few times) to re and im. */
const addSmoothTerms = (
  bath: readonly BathTerm[],
  th: number,
  times: Float64Array,
  { start, end }: TimeRange,
  re: Float64Array,
  im: Float64Array,
): Account | undefined => {
  const evaluator = continuumEvaluator(bath, th, end)
  if (!evaluator) return undefined
  const { evaluate, oscillations, errorEstimate, method, firstTime } = evaluator
  if (times.length >= FEW_TIMES) {
    const smooth = withoutOscillations(evaluate, oscillations)
    const panels = buildTimePanels(smooth, { start, end, firstTime }, times.length / 24)
    if (panels) {
      panels.addTo(times, re, im)
      for (const oscillation of oscillations) addOscillation(oscillation, times, re, im)
      return { errorEstimate: errorEstimate + panels.errorEstimate, method: `${method}, piecewise polynomials in time` }
    }
  }
  const out = new Float64Array(2)
  for (let index = 0; index < times.length; index++) {
    out.fill(0)
    if (times[index]! > 0) evaluate(times[index]!, out)
    re[index]! += out[0]!
    im[index]! += out[1]!
  }
  return { errorEstimate, method }
}

/** Adds the continuum to re and im and says how. */
const addContinuum = (
  bath: readonly BathTerm[],
  temperatureK: number,
  times: Float64Array,
  range: TimeRange,
  re: Float64Array,
  im: Float64Array,
): Account => {
  const th = thermalFrequencyOf(temperatureK)
  const isOscillating = (term: BathTerm): boolean => {
    const { silent, ringing } = toContinuum(term)
    if (silent || !ringing || times.length < FEW_TIMES) return false
    const phase = ringing.frequency * Math.min(ringing.until, range.end)
    return phase > POLYNOMIAL_PHASE && phase < LARGEST_PHASE
  }
  const oscillating = range.uniform ? bath.filter(isOscillating) : []
  const rest = bath.filter((term) => !oscillating.includes(term))
  const accounts = [
    addSmoothTerms(rest, th, times, range, re, im),
    range.uniform && addOscillatingTerms(oscillating, th, range.uniform, times, re, im),
  ].filter((account) => account !== undefined)
  settleOrigin(times, re, im)
  return {
    errorEstimate: accounts.reduce((sum, { errorEstimate }) => sum + errorEstimate, 0),
    method: accounts.map(({ method }) => method).join('; ') || 'discrete modes',
  }
}

/** g0(0) = 0 exactly: polynomials, oscillations and sums cancel there only to rounding. */
const settleOrigin = (times: Float64Array, re: Float64Array, im: Float64Array): void => {
  for (let index = 0; index < times.length; index++) {
    if (times[index] === 0) {
      re[index] = 0
      im[index] = 0
    }
  }
}

/** What a result says about itself, modes included. */
const withModes = (continuum: Account, modes: readonly ResolvedMode[], longest: number): Account => ({
  ...continuum,
  errorEstimate: continuum.errorEstimate + modesErrorEstimate(modes, longest),
})

/** g0 at any times >= 0, in any order (ascending is fastest). */
export const lineBroadeningAt = (phonons: Phonons, temperatureK: number, timesPs: Float64Array): LineBroadening => {
  const re = new Float64Array(timesPs.length)
  const im = new Float64Array(timesPs.length)
  const range = rangeOf(timesPs)
  const continuum = addContinuum(phonons.bath, temperatureK, timesPs, range, re, im)
  const modes = resolveModes(phonons.modes, temperatureK)
  addModesAt(modes, timesPs, re, im)
  return { re, im, ...withModes(continuum, modes, range.end) }
}

/** g0 on a uniform time grid from t = 0. */
export const lineBroadening = (phonons: Phonons, temperatureK: number, grid: TimeGrid): LineBroadening => {
  const times = new Float64Array(grid.samples)
  for (let index = 0; index < grid.samples; index++) times[index] = index * grid.stepPs
  const re = new Float64Array(grid.samples)
  const im = new Float64Array(grid.samples)
  const range = rangeOf(times)
  const continuum = addContinuum(phonons.bath, temperatureK, times, range, re, im)
  const modes = resolveModes(phonons.modes, temperatureK)
  addModesOnGrid(modes, grid, re, im)
  return { re, im, ...withModes(continuum, modes, range.end) }
}
