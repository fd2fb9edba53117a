/**
 * How long the signals of a model last: the time windows that the grids must cover.
 *
 * Along one time axis the signal is bounded by exp(-D(t)),
 *   linear:  D = Re g0_bath(t) + gam t + sig^2 t^2 / 2
 *   echo t1 = t3 = t at waiting time t2:  D = 2 Re g(t) + 2 Re g(t + t2) - Re g(2t + t2) - Re g(t2) + 2 gam t
 * (the bounds of |R2| and |R3| of `third-order.ts` at t1 = t3; source there). Discrete modes recur, so they never shorten a
 * window and are left out. The window ends where Int_t^inf exp(-D) falls below the wanted fraction of the whole
 * integral, which is the error that cutting there leaves at the maximum of a spectrum.
 *
 * D is tabulated at three times an octave and taken as linear in between; beyond the last time it goes on with its last
 * slope. A D that stays bounded has no window: Infinity. Spec: tests/engine/grid.spec.ts.
 */
import { GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS } from './constants'
import { lineBroadeningAt } from './line-broadening'
import type { LineModel } from './types'

const STEPS_PER_OCTAVE = 3

export interface Decay {
  times: Float64Array
  /** D at those times. */
  exponent: Float64Array
}

/** gam = Gamma / (2 hbar), 1/ps. */
export const homogeneousRate = (model: LineModel): number => model.zeroPhononFwhmMeV / (2 * HBAR_MEV_PS)

/** sig, rad/ps. */
export const ensembleSigma = (model: LineModel): number =>
  model.ensembleFwhmMeV / (GAUSSIAN_FWHM_PER_SIGMA * HBAR_MEV_PS)

/** Times from `shortest` to `longest`, three an octave. */
export const octaveTimes = (shortest: number, longest: number): Float64Array =>
  Float64Array.from(
    { length: Math.ceil(Math.log2(longest / shortest) * STEPS_PER_OCTAVE) + 1 },
    (_, k) => shortest * 2 ** (k / STEPS_PER_OCTAVE),
  )

/** D of the linear signal without its ensemble. */
export const linearDecay = (model: LineModel, times: Float64Array): Decay => {
  const gam = homogeneousRate(model)
  const bath = lineBroadeningAt({ bath: model.bath, modes: [] }, model.temperatureK, times).re
  return { times, exponent: times.map((t, k) => bath[k]! + gam * t) }
}

/** Adds sig^2 t^2/2. */
export const withEnsemble = ({ times, exponent }: Decay, model: LineModel): Decay => {
  const sig = ensembleSigma(model)
  return { times, exponent: exponent.map((value, k) => value + 0.5 * (sig * times[k]!) ** 2) }
}

/** D of the rephasing signal on t1 = t3 after the waiting time t2. */
export const echoDecay = (model: LineModel, times: Float64Array, waitingTimePs: number): Decay => {
  const gam = homogeneousRate(model)
  const n = times.length
  const all = new Float64Array(3 * n + 1)
  times.forEach((t, k) => {
    all[k] = t
    all[n + k] = t + waitingTimePs
    all[2 * n + k] = 2 * t + waitingTimePs
  })
  all[3 * n] = waitingTimePs
  const bath = lineBroadeningAt({ bath: model.bath, modes: [] }, model.temperatureK, all).re
  const exponent = times.map((t, k) => 2 * bath[k]! + 2 * bath[n + k]! - bath[2 * n + k]! - bath[3 * n]! + 2 * gam * t)
  return { times, exponent }
}

/** Int of exp(-D) over each interval, D linear in it; the first entry is the piece from 0 to the first time. */
const intervalIntegrals = ({ times, exponent }: Decay): Float64Array =>
  times.map((t, k) => {
    const width = k === 0 ? t : t - times[k - 1]!
    const from = k === 0 ? 0 : exponent[k - 1]!
    const rise = exponent[k]! - from
    const mean = Math.abs(rise) < 1e-6 ? 1 - rise / 2 : -Math.expm1(-rise) / rise
    return width * Math.exp(-from) * mean
  })

/** Int exp(-D) up to the last time of the table, ps. */
export const decayIntegral = (decay: Decay): number => intervalIntegrals(decay).reduce((sum, piece) => sum + piece, 0)

/**
 * Slope of D beyond its last time, 1/ps: the measured one where D still rises in earnest, at least `floor`, which is
 * the part of the slope that is known to last. A rise that does not grow from octave to octave is a logarithm (power
 * law p = 1 at 0 K) or a constant (p > 2): no decay of its own.
 */
const lastingSlope = ({ times, exponent }: Decay, floor: number): number => {
  const n = times.length
  const rise = (k: number) => exponent[k]! - exponent[k - STEPS_PER_OCTAVE]!
  const lasting = rise(n - 1) > 1e-6 && rise(n - 1) > 1.1 * rise(n - 1 - STEPS_PER_OCTAVE)
  const slope = (exponent[n - 1]! - exponent[n - 2]!) / (times[n - 1]! - times[n - 2]!)
  return Math.max(floor, lasting ? slope : 0)
}

/**
 * Time after which less than `fraction` of Int exp(-D) is left; Infinity when D stays bounded.
 * `floorRate` is the slope of D that lasts for certain (gam, or 2 gam on the echo), 1/ps.
 */
export const decayWindow = (decay: Decay, fraction: number, floorRate: number): number => {
  const { times, exponent } = decay
  const n = times.length
  const pieces = intervalIntegrals(decay)
  const slope = lastingSlope(decay, floorRate)
  if (!(slope > 0)) return Infinity
  const beyond = Math.exp(-exponent[n - 1]!) / slope
  const allowed = fraction * pieces.reduce((sum, piece) => sum + piece, beyond)
  if (beyond > allowed) return times[n - 1]! + Math.log(beyond / allowed) / slope
  let tail = beyond
  for (let k = n - 1; k > 0; k--) {
    const next = tail + pieces[k]!
    if (next > allowed) {
      // Inside an interval the logarithm of the tail is close to linear, which is enough for a window.
      const part = tail > 0 ? Math.log(allowed / tail) / Math.log(next / tail) : 1
      return times[k]! - part * (times[k]! - times[k - 1]!)
    }
    tail = next
  }
  return times[0]!
}
