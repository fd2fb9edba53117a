/**
 * Underdamped Brownian oscillator: one vibration broadened by its own damping.
 *
 *   J(w) = 2 lambda w_0^2 w G / ((w_0^2 - w^2)^2 + w^2 G^2),  lambda = S w_0
 *
 * | symbol | variable | unit |
 * | S | huangRhys | 1 |
 * | hbar w_0 | energyMeV | meV |
 * | hbar G | dampingEnergyMeV, below 2 hbar w_0 | meV |
 *
 * With the complex rate a = G/2 + i W, W = sqrt(w_0^2 - G^2/4), J is the sum of two Drude terms of conjugate rates, so that
 *   g0 = 2 Re-parts of the Drude g0 of `overdamped.ts` at rate a with lambda_a/a = i lambda w_0^2 / (2 W a^2)
 * and its only part that keeps oscillating is 2 Re{ (lambda_a/a) cot(a / 2 th) e^{-at} } (real part of g0) and
 * 2 Re{ -(lambda_a/a) e^{-at} } (imaginary part). J is linear at 0: the zero-phonon line has a thermal width, no weight.
 *
 * Source: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8 (multimode Brownian oscillator); residues of
 * the integrand of g0. Accuracy: 1e-12 relative to max(1, |g0|) (tests/engine/damped-bath.spec.ts).
 */
import type { UnderdampedTerm } from '../../schemas/parameter-set'
import { Complex, digamma, type ComplexNumber } from '../complex-functions'
import { angularFrequencyOf } from '../constants'
import { EULER_GAMMA } from '../exponential-integral'
import { buildFrequencyPanels } from '../frequency-panels'
import type { ClosedForm, Continuum, DampedOscillation, DensityIntegrals } from './continuum'
import { MATSUBARA_FROM, MATSUBARA_TERMS } from './overdamped'

const rates = (term: UnderdampedTerm) => {
  const frequency = angularFrequencyOf(term.energyMeV)
  const damping = angularFrequencyOf(term.dampingEnergyMeV)
  return {
    frequency,
    damping,
    lambda: term.huangRhys * frequency,
    resonance: Math.sqrt((frequency - damping / 2) * (frequency + damping / 2)),
  }
}

export const underdampedContinuum = (term: UnderdampedTerm): Continuum => {
  const { frequency, damping, lambda, resonance } = rates(term)
  return {
    silent: lambda === 0,
    density: (w) => {
      const detuning = (frequency - w) * (frequency + w)
      return (2 * lambda * frequency * frequency * w * damping) / (detuning * detuning + w * w * damping * damping)
    },
    low: { exponent: 1, coefficient: (2 * lambda * damping) / (frequency * frequency) },
    lowScale: frequency,
    // J/w^2 falls as w^-5: what lies above is below 1e-15 of g0. The moments need their own end, see the integrals.
    upper: 1e4 * frequency,
    // Int_w^inf J/(pi w^2) = lambda w_0^2 G / (2 pi w^4)
    reach: Math.max(4 * frequency, Math.pow((lambda * frequency * frequency * damping) / (2 * Math.PI * 1e-5), 1 / 4)),
    // Poles at resonance +- i damping/2: no panel is wider than 0.7 of its distance to them.
    panelWidth: (w) =>
      w < resonance ? Math.max(0.35 * damping, 0.45 * (resonance - w)) : 0.7 * Math.hypot(w - resonance, damping / 2),
    firstTime: 0.7 / frequency,
  }
}

/** (1/pi) Int J w dw = lambda w_0^2 exactly; J coth falls as w^-3, so the variance is taken to 1e8 w_0. */
export const underdampedIntegrals = (term: UnderdampedTerm, th: number): DensityIntegrals => {
  const { frequency, lambda } = rates(term)
  const { variance } = buildFrequencyPanels(
    [{ ...underdampedContinuum(term), upper: 1e8 * frequency }],
    th,
    0,
  ).integrals
  return { reorganization: lambda, plateau: null, variance, third: lambda * frequency * frequency }
}

/** lambda_a / a; undefined where two real or nearly equal rates make the parts large and opposite. */
const driven = (term: UnderdampedTerm): { rate: ComplexNumber; amplitude: ComplexNumber } | undefined => {
  const { frequency, damping, lambda, resonance } = rates(term)
  if (!(resonance > 0.05 * frequency)) return undefined
  const rate = new Complex(damping / 2, resonance)
  return { rate, amplitude: new Complex(0, (lambda * frequency * frequency) / (2 * resonance)).div(rate.mul(rate)) }
}

/** cot(z) for Im z > 0; far up, where sin and cos overflow, it is -i to rounding. */
const cotangent = (z: ComplexNumber): ComplexNumber => (z.im > 20 ? new Complex(0, -1) : z.cos().div(z.sin()))

export const underdampedOscillation = (term: UnderdampedTerm, th: number): DampedOscillation | undefined => {
  const parts = driven(term)
  if (!parts) return undefined
  const { rate, amplitude } = parts
  const thermal = th > 0 ? amplitude.mul(cotangent(rate.div(2 * th))) : amplitude.mul(new Complex(0, -1))
  return {
    decay: rate.re,
    frequency: rate.im,
    amplitudeRe: [2 * thermal.re, 2 * thermal.im],
    amplitudeIm: [-2 * amplitude.re, -2 * amplitude.im],
  }
}

export const underdampedClosedForm = (term: UnderdampedTerm, th: number): ClosedForm | undefined => {
  const parts = driven(term)
  const oscillation = underdampedOscillation(term, th)
  if (!parts || !oscillation || !(th > 0)) return undefined
  const { rate, amplitude } = parts
  const { decay, frequency, amplitudeRe, amplitudeIm } = oscillation
  const matsubara = 2 * Math.PI * th
  const x = rate.div(matsubara)
  // 2 gamma_E + psi(1+x) + psi(x) = 2 [gamma_E + psi(1+x)] - 1/x
  const constant = digamma(x.add(1)).add(EULER_GAMMA).mul(2).sub(x.inverse())
  const square = x.mul(x)
  const plateauRe = (2 / Math.PI) * amplitude.mul(constant).re
  const plateauIm = 2 * amplitude.re
  const slope = (2 / Math.PI) * amplitude.re * matsubara
  const weights = Float64Array.from({ length: MATSUBARA_TERMS }, (_, index) => {
    const n = index + 1
    return (2 / Math.PI) * amplitude.mul(square.mul(2 / n).div(square.neg().add(n * n))).re
  })
  return {
    from: MATSUBARA_FROM / matsubara,
    addAt: (time, out) => {
      const tau = matsubara * time
      const ratio = Math.exp(-tau)
      let sum = 0
      for (let n = Math.min(MATSUBARA_TERMS, Math.ceil(40 / tau)) - 1; n >= 0; n--) sum = (sum + weights[n]!) * ratio
      const size = Math.exp(-decay * time)
      const c = size * Math.cos(frequency * time)
      const s = size * Math.sin(frequency * time)
      out[0]! += slope * time + plateauRe + sum + amplitudeRe[0] * c + amplitudeRe[1] * s
      out[1]! += plateauIm + amplitudeIm[0] * c + amplitudeIm[1] * s
    },
  }
}
