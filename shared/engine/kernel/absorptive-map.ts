/**
 * Absorptive map alone, Re(S_R + S_N), with the transforms that a real result needs.
 *
 * z(t1, t3) = NR(t1, t3) + R(-t1, t3) on the torus of `padded` samples a side has S_N + S_R as its transform with +i on both axes;
 * the real part is the transform of its Hermitian part h. Only columns t1 = 0 .. padded/2 of h are transformed over t3, and
 * over t1 two kept E3 bins share one complex transform: `padded` one-dimensional transforms in all instead of four times
 * as many. Entries with t1 = 0 or t3 = 0 mirror onto themselves and are written from one-dimensional products.
 * Accuracy: 1e-14 of the maximum against the plain kernel (tests/engine/map.spec.ts).
 */
import { wrappedBin, type MapBins } from '../map'
import type { MapTables, SignalTables } from '../map-tables'
import type { ComplexSeries } from '../types'
import { assertFits, unpadded } from './complex-map'
import { KernelHeap, ROW_BYTES } from './kernel-memory'
import type { KernelExports } from './load-kernel'

const BLOCK_PAD = 3 * ROW_BYTES
/** Entries between the tables of the bank, as in map-kernel.as; the longest has 2 x 4096 + 16. */
const BANK = 65792 / 8
const TABLES = 17
/** Longest padded length that the bank holds. */
export const LARGEST_PADDED = 4096

/** Copies scale x source in ascending order to target[to ..], and no further than `length`. */
const forward = (target: Float64Array, to: number, source: Float64Array, scale: number, length: number): void => {
  const count = Math.min(source.length, length - to)
  for (let j = Math.max(0, -to); j < count; j++) target[to + j] = scale * source[j]!
}

/** The same in descending order: target[to - j] = scale x source[j]. */
const backward = (target: Float64Array, to: number, source: Float64Array, scale: number, length: number): void => {
  const count = Math.min(source.length, to + 1)
  for (let j = Math.max(0, to - length + 1); j < count; j++) target[to - j] = scale * source[j]!
}

interface Bank {
  bank: number
  third: number
}

/**
 * The tables that `fillHermitian` reads. Terms: NR(a, b), NR*(-a, -b), R(-a, b), R*(a, -b). On the torus -a is padded - a; entry 0
 * of a mirrored table stays 0, because those points are written by `hermitianEdge`.
 */
const hermitianTables = (heap: KernelHeap, { rephasing, nonRephasing }: MapTables, padded: number): Bank => {
  const bank = heap.doubles(TABLES * BANK)
  const third = heap.doubles(8 * padded)
  heap.view(bank, TABLES * BANK).fill(0)
  const table = (k: number) => heap.view(bank + 8 * k * BANK, BANK)
  const r = rephasing.factors!
  const s = nonRephasing.factors!
  const both = 2 * padded + 4
  forward(table(0), 0, s.h.re, 1, both)
  forward(table(1), 0, s.h.im, 1, both)
  backward(table(2), 2 * padded, s.h.re, 1, both)
  backward(table(3), 2 * padded, s.h.im, -1, both)
  if (rephasing.toeplitz) forward(table(4), padded - rephasing.samples + 1, rephasing.toeplitz, 1, both)
  else table(4).fill(1)
  // At a - b + padded: H(padded - a + b) of R(-a, b), and H*(a - b + padded) of R*(a, -b).
  backward(table(5), 2 * padded, r.h.re, 1, both)
  backward(table(6), 2 * padded, r.h.im, 1, both)
  forward(table(7), 0, r.h.re, 1, both)
  forward(table(8), 0, r.h.im, -1, both)
  const side = padded + 4
  const tail = (part: Float64Array) => part.subarray(1)
  forward(table(9), 0, s.p.re, 0.5, side)
  forward(table(10), 0, s.p.im, 0.5, side)
  backward(table(11), padded - 1, tail(s.p.re), 0.5, side)
  backward(table(12), padded - 1, tail(s.p.im), -0.5, side)
  backward(table(13), padded - 1, tail(r.p.re), 0.5, side)
  backward(table(14), padded - 1, tail(r.p.im), 0.5, side)
  forward(table(15), 0, r.p.re, 0.5, side)
  forward(table(16), 0, r.p.im, -0.5, side)
  const numbers = heap.view(third, 8 * padded)
  numbers.fill(0)
  for (let b = 0; b < rephasing.samples; b++) {
    numbers[8 * b] = s.q.re[b]!
    numbers[8 * b + 1] = s.q.im[b]!
    numbers[8 * b + 4] = r.q.re[b]!
    numbers[8 * b + 5] = r.q.im[b]!
    if (b === 0) continue
    const mirrored = 8 * (padded - b)
    numbers[mirrored + 2] = s.q.re[b]!
    numbers[mirrored + 3] = -s.q.im[b]!
    numbers[mirrored + 6] = r.q.re[b]!
    numbers[mirrored + 7] = -r.q.im[b]!
  }
  return { bank, third }
}

/** Signal at t1 = 0 (all t3) or at t3 = 0 (all t1). */
const edgeOf = ({ factors, toeplitz, samples: n }: SignalTables, alongThird: boolean): ComplexSeries => {
  const { p, q, h } = factors!
  const out = { re: new Float64Array(n), im: new Float64Array(n) }
  for (let j = 0; j < n; j++) {
    const a = alongThird ? 0 : j
    const b = alongThird ? j : 0
    const ur = p.re[a]! * q.re[b]! - p.im[a]! * q.im[b]!
    const ui = p.re[a]! * q.im[b]! + p.im[a]! * q.re[b]!
    const t = toeplitz ? toeplitz[j + n - 1]! : 1
    out.re[j] = t * (ur * h.re[j]! - ui * h.im[j]!)
    out.im[j] = t * (ur * h.im[j]! + ui * h.re[j]!)
  }
  return out
}

/** Hermitian part along one edge: [own(j) + own*(-j) + other(-j or j) + other*(j or -j)]/2 on the torus. */
const hermitianEdge = (
  nonRephasing: ComplexSeries,
  rephasing: ComplexSeries,
  padded: number,
  alongThird: boolean,
): ComplexSeries => {
  const n = nonRephasing.re.length
  const out = { re: new Float64Array(padded), im: new Float64Array(padded) }
  const addTo = (j: number, re: number, im: number) => {
    const place = j < 0 ? j + padded : j
    out.re[place]! += re / 2
    out.im[place]! += im / 2
  }
  for (let j = 0; j < n; j++) {
    addTo(j, nonRephasing.re[j]!, nonRephasing.im[j]!)
    addTo(-j, nonRephasing.re[j]!, -nonRephasing.im[j]!)
    // R enters at -t1: along t3 it keeps its place, along t1 it is mirrored.
    const direction = alongThird ? 1 : -1
    addTo(direction * j, rephasing.re[j]!, rephasing.im[j]!)
    addTo(-direction * j, rephasing.re[j]!, -rephasing.im[j]!)
  }
  return out
}

export const kernelAbsorptiveMap = (
  kernel: KernelExports,
  tables: MapTables,
  bins: MapBins,
  into?: Float64Array,
): Float64Array => {
  const { padded } = bins
  assertFits(tables.rephasing.samples, bins)
  if (padded > LARGEST_PADDED)
    throw new RangeError(`expected a padded length of at most ${LARGEST_PADDED}; found ${padded}`)
  const count = 2 * bins.halfBins
  const heap = new KernelHeap(kernel)
  const plan = heap.plan(padded)
  const places = Int32Array.from({ length: count }, (_, i) => wrappedBin(i, bins))
  // Eight bins a transform: the list is filled up with its last bin, whose columns are dropped.
  const groups = 2 * Math.ceil(count / 8)
  const thirdPlaces = heap.putIntegers(
    Int32Array.from({ length: 4 * groups }, (_, i) => places[Math.min(i, count - 1)]!),
  )
  const firstPlaces = heap.putIntegers(places)
  const { bank, third } = hermitianTables(heap, tables, padded)
  const columns = 4 * Math.ceil((padded / 2 + 1) / 4)
  const buffer = heap.rows(padded)
  const blockBytes = ROW_BYTES * columns + BLOCK_PAD
  const middle = heap.doubles((groups * blockBytes) / 8)
  const pitch = 4 * groups + 8
  const out = heap.doubles(count * pitch)

  const { rephasing, nonRephasing } = tables
  const along3 = hermitianEdge(edgeOf(nonRephasing, true), edgeOf(rephasing, true), padded, true)
  const along1 = hermitianEdge(edgeOf(nonRephasing, false), edgeOf(rephasing, false), padded, false)
  const rows = heap.view(buffer, 8 * padded)
  for (let first = 0; first < columns; first += 4) {
    kernel.fillHermitian(buffer, plan.order, padded, first, bank, third)
    for (let lane = 0; lane < 4 && first + lane < padded; lane++) {
      rows[lane] = along1.re[first + lane]!
      rows[lane + 4] = along1.im[first + lane]!
    }
    if (first === 0) {
      for (let b = 0; b < padded; b++) {
        rows[8 * plan.rows[b]!] = along3.re[b]!
        rows[8 * plan.rows[b]! + 4] = along3.im[b]!
      }
    }
    kernel.transform(buffer, padded, plan.twiddles)
    kernel.keepBins(buffer, middle, blockBytes, first, thirdPlaces, groups)
  }
  for (let group = 0; group < groups; group += 2) {
    const block = middle + group * blockBytes
    kernel.gatherHermitian(buffer, plan.order, block, block + blockBytes, padded)
    kernel.transform(buffer, padded, plan.twiddles)
    kernel.scatter(buffer, firstPlaces, count, out, out + 32, 8 * pitch, 4 * group)
  }
  return unpadded(heap.view(out, count * pitch), count, pitch, into)
}
