/**
 * Two-dimensional spectra of one waiting time on the kept bins of a grid.
 *
 *   S_R(E1, E3) = Int Int dt1 dt3 exp(-i w1 t1 + i w3 t3) (R2 + R3),   S_N = Int Int dt1 dt3 exp(+i w1 t1 + i w3 t3) (R1 + R4)
 *   absorptive = Re(S_R + S_N),  w = (E - E0)/hbar
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | S_R, S_N | rephasing, nonRephasing | ps^2 | [E1][E3], row-major, both ascending |
 *
 * Source: Hamm & Zanni (2011), ch. 4 and 9; the tables of `map-tables.ts`. Row-column transforms: t3 of every t1, then t1 of
 * the kept E3 only, zero padding included. This file is the plain kernel, the fallback of the compiled one.
 * Spec: tests/engine/map.spec.ts.
 */
import { fftPlan, forwardFft, inverseFft } from './fft'
import type { MapTables, SignalTables } from './map-tables'
import { signalRow } from './signal-row'
import type { ComplexSeries } from './types'

/** Which bins of the padded transform are kept on both axes: m = (i - halfBins) stride, i = 0 .. 2 halfBins - 1. */
export interface MapBins {
  padded: number
  halfBins: number
  stride: number
}

export interface ComplexMaps {
  rephasing: ComplexSeries
  nonRephasing: ComplexSeries
}

/** Position in the transform of kept bin i. */
export const wrappedBin = (i: number, { padded, halfBins, stride }: MapBins): number => {
  const bin = ((i - halfBins) * stride) % padded
  return bin < 0 ? bin + padded : bin
}

/** What a map that was told to stop returns: zeros. */
export const stoppedMap = (count: number): ComplexSeries => ({
  re: new Float64Array(count * count),
  im: new Float64Array(count * count),
})

/** Plain kernel for one signal. `stop` is polled once every 64 rows; true ends the work with zeros. */
export const plainMap = (tables: SignalTables, bins: MapBins, stop: () => boolean = () => false): ComplexSeries => {
  const { samples: n, rephasing } = tables
  const { padded } = bins
  const count = 2 * bins.halfBins
  const plan = fftPlan(padded)
  const places = Int32Array.from({ length: count }, (_, i) => wrappedBin(i, bins))
  const re = new Float64Array(padded)
  const im = new Float64Array(padded)
  const middleRe = new Float64Array(n * count)
  const middleIm = new Float64Array(n * count)
  for (let i = 0; i < n; i++) {
    if (i % 64 === 0 && stop()) return stoppedMap(count)
    signalRow(tables, i, { re, im })
    re.fill(0, n)
    im.fill(0, n)
    inverseFft(re, im, plan)
    for (let k = 0; k < count; k++) {
      middleRe[k * n + i] = re[places[k]!]!
      middleIm[k * n + i] = im[places[k]!]!
    }
  }
  const out = { re: new Float64Array(count * count), im: new Float64Array(count * count) }
  const transform = rephasing ? forwardFft : inverseFft
  for (let k = 0; k < count; k++) {
    if (k % 64 === 0 && stop()) return stoppedMap(count)
    re.set(middleRe.subarray(k * n, (k + 1) * n))
    im.set(middleIm.subarray(k * n, (k + 1) * n))
    re.fill(0, n)
    im.fill(0, n)
    transform(re, im, plan)
    for (let i = 0; i < count; i++) {
      out.re[i * count + k] = re[places[i]!]!
      out.im[i * count + k] = im[places[i]!]!
    }
  }
  return out
}

export const plainMaps = (tables: MapTables, bins: MapBins): ComplexMaps => ({
  rephasing: plainMap(tables.rephasing, bins),
  nonRephasing: plainMap(tables.nonRephasing, bins),
})
