/**
 * g0(t) of the power law with exponential cutoff, in closed form at every exponent, temperature and time.
 *
 * With s = p - 1, tau = w_c t, nu = th/w_c, beta = th t and Phi_s(L) = (1 - e^{-sL})/s (so that Phi_0(L) = L):
 *   g0 = a Gamma(p) { Phi_s(ln(1 + i tau)) + 2 nu^s sum_(k>=1) (nu + k)^-s Re Phi_s(ln(1 + i beta/(nu + k))) }
 * which is the difference of two Hurwitz zeta functions, a Gamma(s) 2 nu^s [zeta(s, 1+nu) - Re zeta(s, 1+nu+i beta)],
 * written so that nothing cancels at small times and nothing is singular at p = 1 (log-gamma) and p = 2 (digamma).
 * The sum is taken term by term to nu + k = 10 and then by Euler and Maclaurin with the exact integral of the rest.
 *
 * Source: expand coth in exponentials under the integral of g0 (Leggett et al., Rev. Mod. Phys. 59, 1 (1987), for p = 1;
 * NIST Handbook (2010), 25.11.5 and 2.10.1 for the summation). Cost: 1.5 us a time.
 * Accuracy: 5e-14 relative to |g0| (tests/engine/power-law.spec.ts).
 */
import { gamma } from '../gamma'
import type { PointBroadening } from './continuum'

/** B_2j / (2j)! for j = 1.. */
const BERNOULLI = [
  1 / 12,
  -1 / 720,
  1 / 30240,
  -1 / 1209600,
  1 / 47900160,
  -691 / 1307674368000,
  1 / 74724249600,
  -3617 / 10670622842880000,
] as const

/** From this argument on the Bernoulli series above is exact to rounding for s up to 5. */
const SUM_LIMIT = 10

/** Re Phi_s(a + ib). */
const rePhi = (s: number, a: number, b: number): number => {
  if (Math.abs(s) < 1e-6) return a - (s / 2) * (a * a - b * b)
  const sine = Math.sin((s * b) / 2)
  return (2 * sine * sine - Math.expm1(-s * a) * Math.cos(s * b)) / s
}

/** Im Phi_s(a + ib). */
const imPhi = (s: number, a: number, b: number): number =>
  Math.abs(s) < 1e-6 ? b * (1 - s * a) : (Math.exp(-s * a) * Math.sin(s * b)) / s

/** strength is a, cutoff w_c, th = k_B T / hbar (both rad/ps). */
export const exponentialPowerLaw = (
  strength: number,
  exponent: number,
  cutoff: number,
  th: number,
): PointBroadening => {
  const s = exponent - 1
  const amplitude = strength * gamma(exponent)
  const nu = th / cutoff
  const terms = Math.max(0, Math.ceil(SUM_LIMIT - nu) - 1)
  const powers = Float64Array.from({ length: terms }, (_, k) => Math.pow(nu + k + 1, -s))
  const z = nu + terms + 1
  const zPower = Math.pow(z, -s)
  const thermalAmplitude = th > 0 ? 2 * amplitude * Math.pow(nu, s) : 0

  /** Euler-Maclaurin rest of the sum from argument z on. */
  const rest = (beta: number): number => {
    const x = beta / z
    const norm = 1 + x * x
    const a = Math.log1p(x * x) / 2
    const b = Math.atan(x)
    const first = rePhi(s, a, b)
    // Integral of the summand; two forms of one expression, each away from its removable singularity.
    const integral =
      Math.abs(s - 1) < 0.5
        ? (z * zPower * rePhi(s - 1, a, b)) / s
        : (zPower * (z * first - beta * Math.exp(-s * a) * (Math.abs(s) < 1e-6 ? b : Math.sin(s * b) / s))) / (s - 1)
    // D_q = 1 - u^q with u = 1/(1 + ix), q = s + 1, s + 3, ...: forward without cancellation.
    let q = s + 1
    const magnitude = Math.exp(-q * a)
    let uRe = magnitude * Math.cos(q * b)
    let uIm = -magnitude * Math.sin(q * b)
    let difference = q * rePhi(q, a, b)
    const eRe = (x * x * (3 + x * x)) / (norm * norm)
    const eIm = (2 * x) / (norm * norm)
    const squareRe = (1 - x * x) / (norm * norm)
    const squareIm = -eIm
    let factor = zPower / z
    let corrections = 0
    for (const bernoulli of BERNOULLI) {
      corrections += bernoulli * factor * difference
      factor *= (q * (q + 1)) / (z * z)
      difference += uRe * eRe - uIm * eIm
      const re = uRe * squareRe - uIm * squareIm
      uIm = uRe * squareIm + uIm * squareRe
      uRe = re
      q += 2
    }
    return integral + (zPower * first) / 2 + corrections
  }

  return (time, out) => {
    const tau = cutoff * time
    const a = Math.log1p(tau * tau) / 2
    const b = Math.atan(tau)
    out[0]! += amplitude * rePhi(s, a, b)
    out[1]! += amplitude * imPhi(s, a, b)
    if (!(thermalAmplitude > 0)) return
    const beta = th * time
    let sum = rest(beta)
    for (let k = 0; k < terms; k++) {
      const x = beta / (nu + k + 1)
      sum += powers[k]! * rePhi(s, Math.log1p(x * x) / 2, Math.atan(x))
    }
    out[0]! += thermalAmplitude * sum
  }
}
