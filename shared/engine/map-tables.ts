/**
 * One-dimensional tables of which every third-order signal on a grid t_j = j dt is the product.
 *
 *   rephasing      R2 + R3 = P(t1) Q(t3) H(t1 + t3) T(t3 - t1)
 *   non-rephasing  R1 + R4 = P(t1) Q(t3) H(t1 + t3)
 *
 * Stimulated emission and bleach share P and H, so one product serves two pathways:
 *   rephasing      P = -g*(t1) - g*(t1+t2),  Q = SE [g(t2) - g*(t3) - g(t2+t3)], GSB [g*(t2) - g(t3) - g*(t2+t3)],  H = +g*(s)
 *   non-rephasing  P = -g(t1) + g(t1+t2),    Q = SE [-g*(t2) - g*(t3) + g*(t2+t3)], GSB [-g(t2) - g(t3) + g(t2+t3)],  H = -g(s)
 * (exponents). T is the ensemble, a Toeplitz table; for non-rephasing it is a function of t1 + t3 and part of H.
 *
 * The tables are kept as logarithms first. A linear slope of Re g leaves every pathway as exp(-slope (t1 + t3)) and is
 * taken out of the tables, because thermal baths would drive them beyond the range of a double. Where a logarithm still passes
 * 300 the product is not formed from tables: `exact` is false and the signal is built point by point from the sums.
 *
 * Source of the pathways: Mukamel (1995), ch. 8, written out in `third-order.ts`; regrouping of the exponents in place.
 *
 * P carries exp(-gam t1), dt and the half weight of the first sample, Q the same of t3 and exp(-t2/T1).
 * Cost: about 12 exponentials with sine and cosine a sample. Spec: tests/engine/map.spec.ts.
 */
import { ensembleSigma, homogeneousRate } from './coherence-decay'
import type { ComplexSeries, LineModel } from './types'

/** g0 at t_j, j < n, and at t2 + t_j, j < 2n - 1. */
export interface MapBroadening {
  atTimes: ComplexSeries
  atWait: ComplexSeries
}

/** Logarithms: value = exp(re + i im). */
export interface FactorLogs {
  p: ComplexSeries
  /** Stimulated emission and bleach. */
  q: readonly [ComplexSeries, ComplexSeries]
  h: ComplexSeries
}

export interface Factors {
  p: ComplexSeries
  q: ComplexSeries
  h: ComplexSeries
}

export interface SignalTables {
  samples: number
  stepPs: number
  logs: FactorLogs
  /** The factors themselves; undefined where their range does not allow a product. */
  factors: Factors | undefined
  /** exp(-sig^2 (t3 - t1)^2/2) at index t3 - t1 + samples - 1; undefined without ensemble or for non-rephasing. */
  toeplitz: Float64Array | undefined
  /** Exponent of the same ensemble per squared sample distance: sig^2 dt^2/2. */
  ensemble: number
  rephasing: boolean
}

export interface MapTables {
  rephasing: SignalTables
  nonRephasing: SignalTables
}

/** Largest exponent of a table that may be exponentiated alone: three of them stay within a double. */
const LARGEST_LOG = 300
/** Entries below this matter to no sum and would slow it down as subnormal numbers. */
const NEGLIGIBLE = 1e-18
const NEGLIGIBLE_LOG = -45

const series = (length: number): ComplexSeries => ({ re: new Float64Array(length), im: new Float64Array(length) })

const exponential = (log: ComplexSeries): ComplexSeries => {
  const n = log.re.length
  const out = series(n)
  for (let j = 0; j < n; j++) {
    const size = Math.exp(log.re[j]!)
    out.re[j] = size * Math.cos(log.im[j]!)
    out.im[j] = size * Math.sin(log.im[j]!)
  }
  return out
}

const within = (log: ComplexSeries): boolean => {
  for (const value of log.re) if (!(Math.abs(value) < LARGEST_LOG)) return false
  return true
}

const largest = (log: ComplexSeries): number => log.re.reduce((a, b) => Math.max(a, b), -Infinity)

/** Slope of Re g over the second half of the table, 1/ps. */
const lateSlope = ({ atTimes }: MapBroadening, stepPs: number): number => {
  const last = atTimes.re.length - 1
  const middle = last >> 1
  return (atTimes.re[last]! - atTimes.re[middle]!) / ((last - middle) * stepPs)
}

const toFactors = (logs: FactorLogs): Factors | undefined => {
  if (![logs.p, ...logs.q, logs.h].every(within)) return undefined
  const p = exponential(logs.p)
  const q = exponential(logs.q[0])
  const second = exponential(logs.q[1])
  for (let j = 0; j < q.re.length; j++) {
    q.re[j]! += second.re[j]!
    q.im[j]! += second.im[j]!
  }
  const h = exponential(logs.h)
  const rest = largest(logs.p) + Math.max(largest(logs.q[0]), largest(logs.q[1]))
  for (let j = 0; j < h.re.length; j++) {
    if (logs.h.re[j]! + rest < NEGLIGIBLE_LOG) {
      h.re[j] = 0
      h.im[j] = 0
    }
  }
  return { p, q, h }
}

/** Tables of both signals for one waiting time. `broadening.atTimes` has n entries, `atWait` 2n - 1. */
export const mapTables = (
  model: LineModel,
  waitingTimePs: number,
  stepPs: number,
  broadening: MapBroadening,
): MapTables => {
  const { atTimes, atWait } = broadening
  const n = atTimes.re.length
  const slope = lateSlope(broadening, stepPs)
  const rate = homogeneousRate(model) + slope
  const sig = ensembleSigma(model)
  const ensemble = 0.5 * (sig * stepPs) ** 2
  const population = -waitingTimePs / model.populationLifetimePs
  const waitRe = atWait.re[0]! - slope * waitingTimePs
  const waitIm = atWait.im[0]!

  const rp = series(n)
  const rSe = series(n)
  const rGsb = series(n)
  const np = series(n)
  const nSe = series(n)
  const nGsb = series(n)
  for (let j = 0; j < n; j++) {
    const t = j * stepPs
    const weight = Math.log(stepPs) - rate * t + (j === 0 ? -Math.LN2 : 0)
    const re = atTimes.re[j]! - slope * t
    const im = atTimes.im[j]!
    const laterRe = atWait.re[j]! - slope * (t + waitingTimePs)
    const laterIm = atWait.im[j]!
    rp.re[j] = -re - laterRe + weight
    rp.im[j] = im + laterIm
    rSe.re[j] = waitRe - re - laterRe + weight + population
    rSe.im[j] = waitIm + im - laterIm
    rGsb.re[j] = rSe.re[j]!
    rGsb.im[j] = -waitIm - im + laterIm
    np.re[j] = -re + laterRe + weight
    np.im[j] = -im + laterIm
    nSe.re[j] = -waitRe - re + laterRe + weight + population
    nSe.im[j] = waitIm + im - laterIm
    nGsb.re[j] = nSe.re[j]!
    nGsb.im[j] = -waitIm - im + laterIm
  }
  const rh = series(2 * n - 1)
  const nh = series(2 * n - 1)
  for (let j = 0; j < 2 * n - 1; j++) {
    const re = atWait.re[j]! - slope * (j * stepPs + waitingTimePs)
    rh.re[j] = re
    rh.im[j] = -atWait.im[j]!
    nh.re[j] = -re - ensemble * j * j
    nh.im[j] = -atWait.im[j]!
  }
  let toeplitz: Float64Array | undefined
  if (sig > 0) {
    toeplitz = new Float64Array(2 * n - 1)
    for (let d = 1 - n; d < n; d++) {
      const value = Math.exp(-ensemble * d * d)
      toeplitz[d + n - 1] = value < NEGLIGIBLE ? 0 : value
    }
  }
  const rephasingLogs: FactorLogs = { p: rp, q: [rSe, rGsb], h: rh }
  const nonRephasingLogs: FactorLogs = { p: np, q: [nSe, nGsb], h: nh }
  return {
    rephasing: {
      samples: n,
      stepPs,
      logs: rephasingLogs,
      factors: toFactors(rephasingLogs),
      toeplitz,
      ensemble,
      rephasing: true,
    },
    nonRephasing: {
      samples: n,
      stepPs,
      logs: nonRephasingLogs,
      // The ensemble may take H far below the smallest double; those entries are zero and harmless.
      factors: toFactors(withoutDepths(nonRephasingLogs)),
      toeplitz: undefined,
      ensemble,
      rephasing: false,
    },
  }
}

/** H of the non-rephasing signal falls without bound; below -299 it is zero for every purpose. */
const withoutDepths = (logs: FactorLogs): FactorLogs => ({
  ...logs,
  h: { re: logs.h.re.map((value) => Math.max(value, 1 - LARGEST_LOG)), im: logs.h.im },
})
