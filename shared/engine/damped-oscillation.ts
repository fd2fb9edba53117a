/**
 * The part of g0 that keeps oscillating, Re(amplitude e^{-(decay + i frequency) t}): taken out before g0 is turned into
 * polynomials in time and added again exactly, one exponential and one sine a time while it is above rounding.
 * Source: the residue of the integrand of g0 at the complex frequency of the oscillator, derived in `bath/underdamped.ts`.
 * Spec: tests/engine/damped-bath.spec.ts.
 */
import type { DampedOscillation, PointBroadening } from './bath/continuum'

const addScaled = (
  { decay, frequency, amplitudeRe, amplitudeIm }: DampedOscillation,
  sign: number,
  time: number,
  out: Float64Array,
): void => {
  const size = sign * Math.exp(-decay * time)
  const c = size * Math.cos(frequency * time)
  const s = size * Math.sin(frequency * time)
  out[0]! += amplitudeRe[0] * c + amplitudeRe[1] * s
  out[1]! += amplitudeIm[0] * c + amplitudeIm[1] * s
}

export const withoutOscillations =
  (evaluate: PointBroadening, oscillations: readonly DampedOscillation[]): PointBroadening =>
  (time, out) => {
    evaluate(time, out)
    for (const oscillation of oscillations) addScaled(oscillation, -1, time, out)
  }

export const addOscillation = (
  oscillation: DampedOscillation,
  times: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void => {
  // exp(-45) < 3e-20: below rounding of an amplitude up to 1e4 times the tolerance.
  const last = 45 / oscillation.decay
  const out = new Float64Array(2)
  for (let index = 0; index < times.length; index++) {
    if (times[index]! > last) continue
    out.fill(0)
    addScaled(oscillation, 1, times[index]!, out)
    re[index]! += out[0]!
    im[index]! += out[1]!
  }
}
