/**
 * Projections of a third-order signal on t1 + t3 and on t3 - t1: all that slices along and across the diagonal need.
 *
 * On a slice through (E0, E0) the double transform depends on one combination of times only:
 *   cross-diagonal (E1, E3) = (E0 - x/2, E0 + x/2)
 *     rephasing      Int Int exp(i x (t1+t3)/(2 hbar)) R      non-rephasing  Int Int exp(i x (t3-t1)/(2 hbar)) NR
 *   diagonal E1 = E3 = E:   rephasing exp(i (E-E0)(t3-t1)/hbar),   non-rephasing exp(i (E-E0)(t1+t3)/hbar)
 * so that the signal is summed over the other combination first. With an ensemble the rephasing signal lives in the band
 * |t3 - t1| <= 6.5/sig (T below 1e-9) and the non-rephasing one below t1 + t3 = 6.5/sig. That is exact at any ensemble width
 * and costs the band only. H leaves the sum over differences, T the sum over sums.
 * Source: projection-slice theorem; Siemens et al., Opt. Express 18, 17699 (2010).
 */
import { KernelHeap } from './kernel/kernel-memory'
import { loadKernel, type KernelExports } from './kernel/load-kernel'
import type { SignalTables } from './map-tables'
import { signalRow } from './signal-row'
import type { ComplexSeries } from './types'

export interface Projections {
  /** Sum over t3 - t1 at t1 + t3 = j dt, j = 0 .. 2n - 2. */
  onSum: ComplexSeries
  /** Sum over t1 + t3 at t3 - t1 = (j - n + 1) dt, j = 0 .. 2n - 2; zeros when not asked for. */
  onDifference: ComplexSeries
}

/** exp(-BAND^2/2) = 7e-10. */
const BAND = 6.5

/** Number of samples of the combination that the ensemble limits. */
export const bandSamples = (tables: SignalTables): number =>
  tables.ensemble > 0 ? Math.ceil(BAND / Math.sqrt(2 * tables.ensemble)) : 2 * tables.samples

const empty = (n: number): ComplexSeries => ({ re: new Float64Array(n), im: new Float64Array(n) })

/** Both projections; `differences` false leaves `onDifference` at zero. */
export const projections = (tables: SignalTables, differences = true): Projections => {
  const { samples: n, factors } = tables
  if (!factors) return fromRows(tables)
  const onSum = empty(2 * n - 1)
  const onDifference = empty(2 * n - 1)
  const kernel = loadKernel()
  if (kernel) compiledSums(kernel, tables, onSum, differences ? onDifference : undefined)
  else plainSums(tables, onSum, differences ? onDifference : undefined)
  multiply(onSum, factors.h)
  if (tables.toeplitz) {
    for (let j = 0; j < 2 * n - 1; j++) {
      onDifference.re[j]! *= tables.toeplitz[j]!
      onDifference.im[j]! *= tables.toeplitz[j]!
    }
  }
  return { onSum, onDifference }
}

const multiply = ({ re, im }: ComplexSeries, by: ComplexSeries): void => {
  for (let j = 0; j < re.length; j++) {
    const a = re[j]!
    const b = im[j]!
    re[j] = a * by.re[j]! - b * by.im[j]!
    im[j] = a * by.im[j]! + b * by.re[j]!
  }
}

/** First and past-the-last t3 sample that matter at t1 = i dt. */
const rangeAt = ({ samples: n, rephasing }: SignalTables, band: number, i: number): [number, number] =>
  rephasing ? [Math.max(0, i - band), Math.min(n, i + band + 1)] : [0, Math.max(0, Math.min(n, band - i + 1))]

const plainSums = (tables: SignalTables, onSum: ComplexSeries, onDifference: ComplexSeries | undefined): void => {
  const { samples: n, toeplitz } = tables
  const { p, q, h } = tables.factors!
  const band = bandSamples(tables)
  for (let i = 0; i < n; i++) {
    const [from, to] = rangeAt(tables, band, i)
    for (let k = from; k < to; k++) {
      const vr = p.re[i]! * q.re[k]! - p.im[i]! * q.im[k]!
      const vi = p.re[i]! * q.im[k]! + p.im[i]! * q.re[k]!
      const t = toeplitz === undefined ? 1 : toeplitz[k - i + n - 1]!
      onSum.re[i + k]! += t * vr
      onSum.im[i + k]! += t * vi
      if (!onDifference) continue
      onDifference.re[k - i + n - 1]! += vr * h.re[i + k]! - vi * h.im[i + k]!
      onDifference.im[k - i + n - 1]! += vr * h.im[i + k]! + vi * h.re[i + k]!
    }
  }
}

const compiledSums = (
  kernel: KernelExports,
  tables: SignalTables,
  onSum: ComplexSeries,
  onDifference: ComplexSeries | undefined,
): void => {
  const { samples: n, toeplitz } = tables
  const { p, q, h } = tables.factors!
  const band = bandSamples(tables)
  const heap = new KernelHeap(kernel)
  const length = 2 * n - 1
  const [qr, qi] = [heap.put(q.re, n), heap.put(q.im, n)]
  const t = toeplitz ? heap.put(toeplitz, length) : 0
  const sums = [heap.put([], length), heap.put([], length)] as const
  const differences = onDifference && ([heap.put([], length), heap.put([], length)] as const)
  const [hr, hi] = differences ? [heap.put(h.re, length), heap.put(h.im, length)] : [0, 0]
  for (let i = 0; i < n; i++) {
    const [from, to] = rangeAt(tables, band, i)
    if (to <= from) continue
    const third = 8 * from
    const later = 8 * (i + from)
    const apart = 8 * (from - i + n - 1)
    const [a, b] = [p.re[i]!, p.im[i]!]
    const count = to - from
    kernel.addProduct(a, b, qr + third, qi + third, t && t + apart, sums[0] + later, sums[1] + later, count)
    if (!differences) continue
    const [dr, di] = [differences[0] + apart, differences[1] + apart]
    kernel.addTriple(a, b, qr + third, qi + third, hr + later, hi + later, dr, di, count)
  }
  const take = (target: ComplexSeries, [re, im]: readonly [number, number]) => {
    target.re.set(heap.view(re, length))
    target.im.set(heap.view(im, length))
  }
  take(onSum, sums)
  if (onDifference && differences) take(onDifference, differences)
}

/** Without factors: row by row from the logarithms. */
const fromRows = (tables: SignalTables): Projections => {
  const n = tables.samples
  const onSum = empty(2 * n - 1)
  const onDifference = empty(2 * n - 1)
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
  return { onSum, onDifference }
}
