/**
 * One row of the time-domain signal, all t3 at one t1, from the tables of `map-tables.ts`: the product of factors, or
 * where their range forbids it the sum of their logarithms point by point.
 */
import type { ComplexSeries } from './types'
import type { SignalTables } from './map-tables'

/** Points whose exponent lies this far below 0 (beside dt^2) are zero: exp(-40) is 4e-18. */
const SKIPPED_LOG = -40

const factorRow = (tables: SignalTables, i: number, row: ComplexSeries): void => {
  const { p, q, h } = tables.factors!
  const { samples: n, toeplitz } = tables
  const pr = p.re[i]!
  const pi = p.im[i]!
  const hr = h.re
  const hi = h.im
  const qr = q.re
  const qi = q.im
  const { re, im } = row
  for (let k = 0; k < n; k++) {
    const a = hr[i + k]!
    const b = hi[i + k]!
    const ur = a * qr[k]! - b * qi[k]!
    const ui = a * qi[k]! + b * qr[k]!
    const t = toeplitz === undefined ? 1 : toeplitz[k - i + n - 1]!
    re[k] = t * (ur * pr - ui * pi)
    im[k] = t * (ur * pi + ui * pr)
  }
}

const logRow = (tables: SignalTables, i: number, row: ComplexSeries): void => {
  const { logs, samples: n, ensemble, rephasing, stepPs } = tables
  const floor = SKIPPED_LOG + 2 * Math.log(stepPs)
  for (let k = 0; k < n; k++) {
    let re = 0
    let im = 0
    const spread = rephasing ? ensemble * (k - i) * (k - i) : 0
    for (const q of logs.q) {
      const size = logs.p.re[i]! + q.re[k]! + logs.h.re[i + k]! - spread
      if (size < floor) continue
      const phase = logs.p.im[i]! + q.im[k]! + logs.h.im[i + k]!
      const value = Math.exp(size)
      re += value * Math.cos(phase)
      im += value * Math.sin(phase)
    }
    row.re[k] = re
    row.im[k] = im
  }
}

/** Signal at t1 = i dt for k = 0..n-1 of t3, weights included, written to `row` (entries above n untouched). */
export const signalRow = (tables: SignalTables, i: number, row: ComplexSeries): void =>
  tables.factors ? factorRow(tables, i, row) : logRow(tables, i, row)
