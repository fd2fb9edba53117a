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
/** Extra entries so that four columns can be read beyond the last one. */
const SPARE = 8

/** Values of `source` at index(i), 0 outside it, times `factor`, for i < length. */
const arranged = (
  heap: KernelHeap,
  source: Float64Array | undefined,
  length: number,
  index: (i: number) => number,
  factor: number,
): number => {
  const at = heap.doubles(length)
  const view = heap.view(at, length)
  for (let i = 0; i < length; i++) {
    const j = index(i)
    view[i] = source === undefined ? factor : j >= 0 && j < source.length ? factor * source[j]! : 0
  }
  return at
}

/** The 26 offsets that `fillHermitian` reads. */
const hermitianTables = (heap: KernelHeap, { rephasing, nonRephasing }: MapTables, padded: number): number => {
  const n = rephasing.samples
  const r = rephasing.factors!
  const s = nonRephasing.factors!
  const side = padded + SPARE
  const both = 2 * padded + SPARE
  const same = (i: number) => i
  // Column 0 mirrors onto itself; its entries are written by `writeEdges`.
  const mirrored = (i: number) => (i === 0 ? -1 : padded - i)
  const complex = (series: ComplexSeries, length: number, index: (i: number) => number, scale: number, sign: number) =>
    [arranged(heap, series.re, length, index, scale), arranged(heap, series.im, length, index, sign * scale)] as const
  const sums = (i: number) => i
  const mirroredSums = (i: number) => 2 * padded - i
  // H of the last two terms runs with t1 - t3: entry j stands for t1 - t3 = j - (padded - 1), and j - padded.
  const backward = (j: number) => 2 * padded - 1 - j
  const ensemble = (i: number) => (Math.abs(i - padded) < n ? i - padded + n - 1 : -1)
  const p = [
    complex(s.p, side, same, 0.5, 1),
    complex(s.p, side, mirrored, 0.5, -1),
    complex(r.p, side, mirrored, 0.5, 1),
    complex(r.p, side, same, 0.5, -1),
  ]
  const q = [
    complex(s.q, side, same, 1, 1),
    complex(s.q, side, mirrored, 1, -1),
    complex(r.q, side, same, 1, 1),
    complex(r.q, side, mirrored, 1, -1),
  ]
  const h = [
    complex(s.h, both, sums, 1, 1),
    complex(s.h, both, mirroredSums, 1, -1),
    complex(r.h, both, backward, 1, 1),
    complex(r.h, both, same, 1, -1),
  ]
  const t = arranged(heap, rephasing.toeplitz, both, ensemble, 1)
  const offsets = [...p.flat(), ...q.flat(), ...h.flat(), t, t]
  const shift = [padded - 1, padded - 1, padded, padded]
  shift.forEach((entries, k) => {
    offsets[20 + k]! += 8 * entries
  })
  return heap.putIntegers(offsets)
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

export const kernelAbsorptiveMap = (kernel: KernelExports, tables: MapTables, bins: MapBins): Float64Array => {
  const { padded } = bins
  assertFits(tables.rephasing.samples, bins)
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
  const offsets = hermitianTables(heap, tables, padded)
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
    kernel.fillHermitian(buffer, plan.order, padded, first, offsets)
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
  return unpadded(heap.view(out, count * pitch), count, pitch)
}
