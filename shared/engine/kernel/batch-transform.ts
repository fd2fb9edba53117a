/**
 * Transforms exp(+i ...) of several one-dimensional signals at chosen bins: four at a time by the compiled kernel, one after
 * another without it. Signals are padded with zeros.
 */
import { fftPlan, inverseFft } from '../fft'
import type { ComplexSeries } from '../types'
import { KernelHeap } from './kernel-memory'
import { loadKernel, type KernelExports } from './load-kernel'

const seriesOf = (length: number): ComplexSeries => ({ re: new Float64Array(length), im: new Float64Array(length) })

const LANES = 4
const ROW = 8

const inBatches = (
  kernel: KernelExports,
  signals: readonly ComplexSeries[],
  padded: number,
  places: readonly Int32Array[],
): ComplexSeries[] => {
  const heap = new KernelHeap(kernel)
  const plan = heap.plan(padded)
  const buffer = heap.rows(padded)
  const rows = heap.view(buffer, ROW * padded)
  const results = signals.map((_, index) => seriesOf(places[index]!.length))
  for (let first = 0; first < signals.length; first += LANES) {
    rows.fill(0)
    const batch = signals.slice(first, first + LANES)
    batch.forEach(({ re, im }, lane) => {
      for (let j = 0; j < re.length; j++) {
        const row = ROW * plan.rows[j]! + lane
        rows[row] = re[j]!
        rows[row + LANES] = im[j]!
      }
    })
    kernel.transform(buffer, padded, plan.twiddles)
    batch.forEach((_, lane) => {
      const { re, im } = results[first + lane]!
      const wanted = places[first + lane]!
      for (let i = 0; i < wanted.length; i++) {
        const row = ROW * wanted[i]! + lane
        re[i] = rows[row]!
        im[i] = rows[row + LANES]!
      }
    })
  }
  return results
}

/** Signal k at bins places[k], all of length `padded`, a power of two from 4 up. */
export const transformBatch = (
  signals: readonly ComplexSeries[],
  padded: number,
  places: readonly Int32Array[],
): ComplexSeries[] => {
  const kernel = loadKernel()
  if (kernel) return inBatches(kernel, signals, padded, places)
  return signals.map((signal, index) => {
    const full = seriesOf(padded)
    full.re.set(signal.re)
    full.im.set(signal.im)
    inverseFft(full.re, full.im, fftPlan(padded))
    const at = (part: Float64Array) => Float64Array.from(places[index]!, (place) => part[place]!)
    return { re: at(full.re), im: at(full.im) }
  })
}
