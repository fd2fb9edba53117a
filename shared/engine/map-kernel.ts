/**
 * Chooses the kernel of a map: the compiled one where this host and these tables allow it, else the plain one of `map.ts`.
 * Both give the same numbers to rounding, 1e-14 of the maximum (tests/engine/map.spec.ts).
 */
import { edgeCorrection, largestModulus } from './edge-correction'
import { kernelAbsorptiveMap, LARGEST_PADDED } from './kernel/absorptive-map'
import { kernelMap } from './kernel/complex-map'
import { loadKernel } from './kernel/load-kernel'
import { plainMap, plainMaps, type MapBins } from './map'
import type { MapTables, SignalTables } from './map-tables'
import type { ComplexSeries } from './types'

/** Complex map of one signal, ps^2, row-major [E1][E3]. Polls `stop`; a stopped map is zero. */
export const signalMap = (tables: SignalTables, bins: MapBins, stop?: () => boolean): ComplexSeries => {
  const kernel = loadKernel()
  return kernel && tables.factors ? kernelMap(kernel, tables, bins, stop) : plainMap(tables, bins, stop)
}

/** Re(S_R + S_N) alone, at a quarter of the transforms of the two complex maps; written to `into` when that is given. */
export const absorptiveMap = (tables: MapTables, bins: MapBins, into?: Float64Array): Float64Array => {
  const kernel = loadKernel()
  if (kernel && bins.padded <= LARGEST_PADDED && tables.rephasing.factors && tables.nonRephasing.factors) {
    return kernelAbsorptiveMap(kernel, tables, bins, into)
  }
  const { rephasing, nonRephasing } = plainMaps(tables, bins)
  const out = into ?? new Float64Array(rephasing.re.length)
  for (let i = 0; i < out.length; i++) out[i] = rephasing.re[i]! + nonRephasing.re[i]!
  return out
}

export interface CorrectedMap extends ComplexSeries {
  /** Estimate as a fraction of the largest modulus; null where no correction was possible. */
  discretisationError: number | null
}

/** Complex map with its end correction: what a run stores. */
export const correctedMap = (tables: SignalTables, bins: MapBins, stop?: () => boolean): CorrectedMap => {
  const map = signalMap(tables, bins, stop)
  const left = edgeCorrection(tables, bins.padded)?.addToMap(map, bins)
  const largest = largestModulus(map)
  return { ...map, discretisationError: left === undefined || largest === 0 ? null : left / largest }
}
