/**
 * Projections of a third-order signal on t1 + t3 and on t3 - t1: all that slices along and across the diagonal need.
 *
 * On a slice through (D, D) the double transform depends on one combination of times only:
 *   cross-diagonal (E1, E3) = (D - x/2, D + x/2), y = (D - E0)/hbar
 *     rephasing      Int Int exp(i x (t1+t3)/(2 hbar)) exp(i y (t3-t1)) R      non-rephasing  exp(i x (t3-t1)/(2 hbar)) exp(i y (t1+t3))
 *   diagonal E1 = E3 = E:   rephasing exp(i (E-E0)(t3-t1)/hbar),   non-rephasing exp(i (E-E0)(t1+t3)/hbar)
 * so that the signal is summed over the other combination first. With an ensemble the rephasing signal lives in the band
 * |t3 - t1| <= 6.5/sig (T below 1e-9) and the non-rephasing one below t1 + t3 = 6.5/sig. That is exact at any ensemble width
 * and costs the band only. Source: projection-slice theorem; Siemens et al., Opt. Express 18, 17699 (2010).
 */
import type { SignalTables } from './map-tables'
import { signalRow } from './signal-row'
import type { ComplexSeries } from './types'

export interface Projections {
  /** Sum over t3 - t1 at t1 + t3 = j dt, j = 0 .. 2n - 2; undefined when not asked for. */
  onSum: ComplexSeries
  /** Sum over t1 + t3 at t3 - t1 = (j - n + 1) dt, j = 0 .. 2n - 2. */
  onDifference: ComplexSeries
}

/** exp(-BAND^2/2) = 7e-10. */
const BAND = 6.5

/** Number of samples of the combination that the ensemble limits. */
export const bandSamples = (tables: SignalTables): number =>
  tables.ensemble > 0 ? Math.ceil(BAND / Math.sqrt(2 * tables.ensemble)) : 2 * tables.samples

const empty = (n: number): ComplexSeries => ({ re: new Float64Array(n), im: new Float64Array(n) })

/** Both projections, y = 0 (slices through E0). `differences` false leaves `onDifference` empty. */
export const projections = (tables: SignalTables, differences = true): Projections => {
  const { samples: n, factors } = tables
  const onSum = empty(2 * n - 1)
  const onDifference = empty(2 * n - 1)
  if (factors) addProducts(tables, onSum, differences ? onDifference : undefined)
  else addRows(tables, onSum, onDifference)
  return { onSum, onDifference }
}

/** From factors: H leaves the sum over differences, T the sum over sums. */
const addProducts = (tables: SignalTables, onSum: ComplexSeries, onDifference: ComplexSeries | undefined): void => {
  const { samples: n, rephasing, toeplitz } = tables
  const { p, q, h } = tables.factors!
  const band = bandSamples(tables)
  const sumRe = onSum.re
  const sumIm = onSum.im
  for (let i = 0; i < n; i++) {
    const from = rephasing ? Math.max(0, i - band) : 0
    const to = rephasing ? Math.min(n, i + band + 1) : Math.min(n, band - i + 1)
    const pr = p.re[i]!
    const pi = p.im[i]!
    for (let k = from; k < to; k++) {
      const a = q.re[k]!
      const b = q.im[k]!
      const vr = pr * a - pi * b
      const vi = pr * b + pi * a
      const t = toeplitz === undefined ? 1 : toeplitz[k - i + n - 1]!
      sumRe[i + k]! += t * vr
      sumIm[i + k]! += t * vi
      if (onDifference) {
        const c = h.re[i + k]!
        const d = h.im[i + k]!
        onDifference.re[k - i + n - 1]! += t * (vr * c - vi * d)
        onDifference.im[k - i + n - 1]! += t * (vr * d + vi * c)
      }
    }
  }
  for (let j = 0; j < 2 * n - 1; j++) {
    const a = sumRe[j]!
    const b = sumIm[j]!
    sumRe[j] = a * h.re[j]! - b * h.im[j]!
    sumIm[j] = a * h.im[j]! + b * h.re[j]!
  }
}

/** Without factors: row by row from the logarithms. */
const addRows = (tables: SignalTables, onSum: ComplexSeries, onDifference: ComplexSeries): void => {
  const n = tables.samples
  const row = empty(n)
  for (let i = 0; i < n; i++) {
    signalRow(tables, i, row)
    for (let k = 0; k < n; k++) {
      onSum.re[i + k]! += row.re[k]!
      onSum.im[i + k]! += row.im[k]!
      onDifference.re[k - i + n - 1]! += row.re[k]!
      onDifference.im[k - i + n - 1]! += row.im[k]!
    }
  }
}
