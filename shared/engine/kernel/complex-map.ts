/**
 * Complex map of one signal by the compiled kernel: the numbers of `plainMap`, four columns at a time.
 *
 * t3 of every t1 first, of which the kept bins move to a store of blocks (four bins, all t1); then t1 of every block. The
 * kernel has the sign +i only: the rephasing t1 axis, which has -i, is read at the mirrored bins.
 */
import { isPowerOfTwo } from '../fft'
import { stoppedMap, wrappedBin, type MapBins } from '../map'
import type { SignalTables } from '../map-tables'
import type { ComplexSeries } from '../types'
import { KernelHeap, ROW_BYTES } from './kernel-memory'
import type { KernelExports } from './load-kernel'

/** Spreads the blocks over the cache sets: a power of two between them would fold them onto each other. */
const BLOCK_PAD = 3 * ROW_BYTES
const POLL_EVERY = 64

export const kernelMap = (
  kernel: KernelExports,
  tables: SignalTables,
  bins: MapBins,
  stop: () => boolean = () => false,
): ComplexSeries => {
  const { samples: n, toeplitz, rephasing } = tables
  const { p, q, h } = tables.factors!
  const { padded } = bins
  const count = 2 * bins.halfBins
  assertFits(n, bins)
  const columns = 4 * Math.ceil(n / 4)
  const heap = new KernelHeap(kernel)
  const places = Int32Array.from({ length: count }, (_, i) => wrappedBin(i, bins))
  const plan = heap.plan(padded)
  const thirdPlaces = heap.putIntegers(places)
  const firstPlaces = rephasing ? heap.putIntegers(places.map((bin) => (bin === 0 ? 0 : padded - bin))) : thirdPlaces
  const pr = heap.put(p.re, columns)
  const pi = heap.put(p.im, columns)
  const qr = heap.put(q.re, n)
  const qi = heap.put(q.im, n)
  const hr = heap.put(h.re, 2 * columns)
  const hi = heap.put(h.im, 2 * columns)
  const t = toeplitz ? heap.put(toeplitz, 2 * columns) : 0
  const buffer = heap.rows(padded)
  const blockBytes = ROW_BYTES * columns + BLOCK_PAD
  const groups = count / 4
  const middle = heap.doubles((groups * blockBytes) / 8)
  const pitch = count + 8
  const re = heap.doubles(count * pitch)
  const im = heap.doubles(count * pitch)

  for (let first = 0; first < columns; first += 4) {
    if (first % (4 * POLL_EVERY) === 0 && stop()) return stoppedMap(count)
    kernel.clearRows(buffer, plan.order, n, padded)
    kernel.fillProduct(buffer, plan.order, n, first, pr, pi, qr, qi, hr, hi, t)
    kernel.transform(buffer, padded, plan.twiddles)
    kernel.keepBins(buffer, middle, blockBytes, first, thirdPlaces, groups)
  }
  for (let group = 0; group < groups; group++) {
    if (group % POLL_EVERY === 0 && stop()) return stoppedMap(count)
    kernel.clearRows(buffer, plan.order, n, padded)
    kernel.gather(buffer, plan.order, middle + group * blockBytes, n)
    kernel.transform(buffer, padded, plan.twiddles)
    kernel.scatter(buffer, firstPlaces, count, re, im, 8 * pitch, 4 * group)
  }
  return {
    re: unpadded(heap.view(re, count * pitch), count, pitch),
    im: unpadded(heap.view(im, count * pitch), count, pitch),
  }
}

/** The kernel writes where it is told: sizes are checked before. */
export const assertFits = (samples: number, { padded, halfBins }: MapBins): void => {
  if (padded >= Math.max(4, samples) && isPowerOfTwo(padded) && halfBins % 2 === 0) return
  throw new RangeError(
    `expected a power of two from ${samples} up as padded length and an even number of bins a side; found ${padded} and ${halfBins}`,
  )
}

/** Rows of a plane without their padding, into a given array or a new one. */
export const unpadded = (
  plane: Float64Array,
  count: number,
  pitch: number,
  into: Float64Array = new Float64Array(count * count),
): Float64Array => {
  for (let i = 0; i < count; i++) into.set(plane.subarray(i * pitch, i * pitch + count), i * count)
  return into
}
