/**
 * Overdamped (Drude-Lorentz) bath.
 *
 *   J(w) = 2 lambda w G / (w^2 + G^2)
 *
 * | symbol | variable | unit |
 * | lambda | reorganizationEnergyMeV | meV |
 * | hbar G | relaxationEnergyMeV | meV |
 *
 * With x = G/(2 pi th), tau = 2 pi th t (th = k_B T/hbar) and m the whole number nearest to x, the Matsubara series of g0
 * with its terms linear in t summed in closed form is
 *   Im g0 = (lambda/G)(1 - e^{-Gt})
 *   Re g0 = (lambda/G) { tau/pi + cot(pi x) e^{-x tau} + [2 gamma_E + psi(1+x) + psi(x)]/pi
 *                        + (2 x^2/pi) sum_(n>=1) e^{-n tau} / (n (n^2 - x^2)) }
 * The pole of cot(pi x) at x = m and the term n = m cancel; they are evaluated together. From tau = 0.6 on the sum takes at
 * most 62 terms; earlier the engine's quadrature is used, whose panels follow the 1/w^3 tail to 1e9 G. At T = 0, with y = Gt,
 *   Re g0 = (2 lambda / pi G) { gamma_E + ln y + [e^y E_1(y) - e^{-y} Ei(y)]/2 }
 *
 * Source: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), eqs. 8.48 to 8.49; sums by NIST Handbook (2010), 5.7.6 and
 * 5.5.4. Accuracy: 1e-13 relative to max(1, |g0|) (tests/engine/damped-bath.spec.ts).
 */
import type { OverdampedTerm } from '../../schemas/parameter-set'
import { angularFrequencyOf } from '../constants'
import { digammaExcess } from '../digamma'
import { EULER_GAMMA, exponentialSeries, scaledE1, scaledEi } from '../exponential-integral'
import type { ClosedForm, Continuum, DensityIntegrals, PointBroadening } from './continuum'

/** e^{-0.6 n} < 1e-16 from n = 62 on. */
export const MATSUBARA_FROM = 0.6
export const MATSUBARA_TERMS = 62

const rates = (term: OverdampedTerm) => ({
  lambda: angularFrequencyOf(term.reorganizationEnergyMeV),
  relaxation: angularFrequencyOf(term.relaxationEnergyMeV),
})

export const overdampedContinuum = (term: OverdampedTerm): Continuum => {
  const { lambda, relaxation } = rates(term)
  return {
    silent: lambda === 0,
    density: (w) => (2 * lambda * w * relaxation) / (w * w + relaxation * relaxation),
    low: { exponent: 1, coefficient: (2 * lambda) / relaxation },
    lowScale: relaxation,
    upper: 1e9 * relaxation,
    // Int_w^inf J/(pi w^2) = lambda G / (pi w^2)
    reach: Math.max(10 * relaxation, Math.sqrt((lambda * relaxation) / (Math.PI * 1e-5))),
    panelWidth: () => Infinity,
    firstTime: 0.5 / relaxation,
  }
}

export const overdampedIntegrals = (term: OverdampedTerm): DensityIntegrals => ({
  reorganization: rates(term).lambda,
  plateau: null,
  // J falls as 1/w: the spectrum has no second moment.
  variance: null,
  third: null,
})

/** cot(y) - 1/y, by its power series where the difference would cancel. Source: Abramowitz & Stegun (1964), 4.3.70. */
const cotangentExcess = (y: number): number => {
  if (Math.abs(y) > 0.3) return 1 / Math.tan(y) - 1 / y
  const square = y * y
  const series = [1 / 3, 1 / 45, 2 / 945, 1 / 4725, 2 / 93555, 1382 / 638512875, 4 / 18243225, 3617 / 162820783125]
  return -y * series.reduceRight((sum, coefficient) => sum * square + coefficient, 0)
}

/** expm1(-y) + y, without cancellation for small y. */
const exponentialExcess = (y: number): number => {
  if (y > 0.5) return Math.expm1(-y) + y
  let term = (y * y) / 2
  let sum = term
  for (let k = 3; k < 18; k++) {
    term *= -y / k
    sum += term
  }
  return sum
}

/** g0 at T = 0. Below y = 1 the logarithms of both integrals are joined: (gamma + ln y)(1 - cosh y) is free of cancellation. */
const coldBroadening =
  (lambda: number, relaxation: number): PointBroadening =>
  (time, out) => {
    const y = relaxation * time
    if (!(y > 0)) return
    const half = Math.sinh(y / 2)
    const bracket =
      y < 1
        ? -2 * (EULER_GAMMA + Math.log(y)) * half * half -
          (Math.exp(y) * exponentialSeries(-y) + Math.exp(-y) * exponentialSeries(y)) / 2
        : EULER_GAMMA + Math.log(y) + (scaledE1(y) - scaledEi(y)) / 2
    out[0]! += ((2 * lambda) / (Math.PI * relaxation)) * bracket
    out[1]! -= (lambda / relaxation) * Math.expm1(-y)
  }

export const overdampedClosedForm = (term: OverdampedTerm, th: number): ClosedForm | undefined => {
  const { lambda, relaxation } = rates(term)
  if (!(th > 0)) return { from: 0, addAt: coldBroadening(lambda, relaxation) }
  const matsubara = 2 * Math.PI * th
  const x = relaxation / matsubara
  const m = Math.round(x)
  const delta = x - m
  const amplitude = lambda / relaxation
  // 2 gamma_E + psi(1+x) + psi(x) = 2 [psi(1+x) - psi(1)] - 1/x; for m = 0 the pole 1/x belongs to the merged term.
  const constant = 2 * digammaExcess(x) - (m > 0 ? 1 / x : 0)
  const weights = Float64Array.from({ length: MATSUBARA_TERMS }, (_, index) => {
    const n = index + 1
    return n === m ? 1 / (m + x) - 2 / m : (2 * x * x) / (n * (n - x) * (n + x))
  })
  /** e^{-m tau} { [cot(pi d) - 1/(pi d)] e^{-d tau} + (e^{-d tau} - 1)/(pi d) }, d = x - m. */
  const merged = (tau: number): number => {
    const rest = cotangentExcess(Math.PI * delta) * Math.exp(-x * tau)
    if (m === 0) return rest + exponentialExcess(delta * tau) / (Math.PI * delta)
    const quotient = delta === 0 ? -tau : Math.expm1(-delta * tau) / delta
    return rest + (Math.exp(-m * tau) * quotient) / Math.PI
  }
  return {
    from: MATSUBARA_FROM / matsubara,
    addAt: (time, out) => {
      const tau = matsubara * time
      const ratio = Math.exp(-tau)
      let sum = 0
      for (let n = Math.min(MATSUBARA_TERMS, Math.ceil(40 / tau)) - 1; n >= 0; n--) sum = (sum + weights[n]!) * ratio
      const linear = m === 0 ? 0 : tau / Math.PI
      out[0]! += amplitude * (linear + merged(tau) + (constant + sum) / Math.PI)
      out[1]! -= amplitude * Math.expm1(-relaxation * time)
    },
  }
}
