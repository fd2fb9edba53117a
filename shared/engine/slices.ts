/**
 * Slices of two-dimensional spectra through (E0, E0): along the diagonal and across it.
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | x = E3 - E1 across (two bins a step), E along | axis | meV | [2 halfBins] |
 * | S_R, S_N | rephasing, nonRephasing | ps^2 | [2 halfBins] complex |
 * | Re(S_R + S_N) | absorptive | ps^2 | [2 halfBins] |
 *
 * One-dimensional transforms of `projection.ts`; with x in steps of two energy steps the points are those of the full map,
 * and the numbers agree with it to rounding (tests/engine/slices.spec.ts).
 *
 * Strongly inhomogeneous reduction of the rephasing cross-diagonal (one integral over t1 = t3 = t),
 *   S_R(x) = (sqrt(2 pi)/sig) Int dt exp(i x t/hbar) R(t, t2, t) - R(0, t2, 0)/sig^2:
 * its error is estimated from the curvature of R across t1 = t3, and it is taken when the estimate is below 1e-6 of the
 * maximum; the band otherwise. The answer says which, and the estimate.
 * Source: Siemens et al., Opt. Express 18, 17699 (2010), equations for the diagonal and cross-diagonal line shapes.
 */
import { edgeCorrection, type EdgeCorrection } from './edge-correction'
import { transformBatch } from './kernel/batch-transform'
import type { Factors, MapTables, SignalTables } from './map-tables'
import { wrappedBin, type MapBins } from './map'
import { bandSamples, projections } from './projection'
import type { ComplexSeries } from './types'

export interface SliceMethod {
  method: 'band' | 'reduction'
  /** Estimated error of the reduction, as a fraction of the maximum of the slice; null without ensemble. */
  reductionError: number | null
  /** Samples of t3 - t1 that were summed. */
  band: number
}

const REDUCTION_TOLERANCE = 1e-6

const empty = (n: number): ComplexSeries => ({ re: new Float64Array(n), im: new Float64Array(n) })

/** Transform exp(+i ...) of samples first, first+1, ... folded into `padded`, at the kept bins; first may be negative. */
const keptTransform = (series: ComplexSeries, first: number, bins: MapBins): ComplexSeries => {
  const { padded } = bins
  const folded = empty(padded)
  for (let j = 0; j < series.re.length; j++) {
    const place = (((j + first) % padded) + padded) % padded
    folded.re[place]! += series.re[j]!
    folded.im[place]! += series.im[j]!
  }
  const places = Int32Array.from({ length: 2 * bins.halfBins }, (_, i) => wrappedBin(i, bins))
  return transformBatch([folded], padded, [places])[0]!
}

export interface Slices {
  crossDiagonal: { rephasing: ComplexSeries; nonRephasing: ComplexSeries }
  diagonal: { rephasing: ComplexSeries; nonRephasing: ComplexSeries }
  method: SliceMethod
}

interface Reduction {
  /** Its error as a fraction of the largest value that the slice can have, the sum of |R|. */
  error: number
  /** The slice itself, made when asked for. */
  slice: () => ComplexSeries
}

/** P(t1) Q(t3) H(t1 + t3) without the ensemble. */
const product = ({ p, q, h }: Factors, i: number, k: number): [number, number] => {
  const ar = p.re[i]! * q.re[k]! - p.im[i]! * q.im[k]!
  const ai = p.re[i]! * q.im[k]! + p.im[i]! * q.re[k]!
  return [ar * h.re[i + k]! - ai * h.im[i + k]!, ar * h.im[i + k]! + ai * h.re[i + k]!]
}

/**
 * The one-dimensional reduction with its error: half the second difference of R across t1 = t3 at the distance 1/sig,
 * summed over the slice, and the change of the corner over that distance.
 */
export const reducedCrossDiagonal = (tables: SignalTables, bins: MapBins): Reduction | undefined => {
  const { factors, samples: n, ensemble } = tables
  if (!factors || !(ensemble > 0)) return undefined
  const sigStep = Math.sqrt(2 * ensemble)
  const scale = Math.sqrt(2 * Math.PI) / sigStep
  const apart = Math.min(n - 1, Math.max(1, Math.round(1 / sigStep)))
  const signal = empty(2 * n - 1)
  let curvature = 0
  let size = 0
  for (let j = 0; j < n; j++) {
    const [re, im] = product(factors, j, j)
    // P and Q both carry the half weight of their first sample: the single integral wants one of them.
    const weight = j === 0 ? 2 * scale : scale
    signal.re[2 * j] = weight * re
    signal.im[2 * j] = weight * im
    size += weight * Math.hypot(re, im)
    if (j > apart && j + apart < n) {
      const before = product(factors, j - apart, j + apart)
      const after = product(factors, j + apart, j - apart)
      curvature += 0.5 * scale * Math.hypot(before[0] + after[0] - 2 * re, before[1] + after[1] - 2 * im)
    }
  }
  const first = product(factors, 0, 0)
  const later = product(factors, apart, apart)
  const corner = [(4 * first[0]) / (sigStep * sigStep), (4 * first[1]) / (sigStep * sigStep)] as const
  // The corner is flat only for |x| well below hbar sig: its slope in x was measured as 0.28 of this.
  const tilt = (2 * Math.PI * bins.halfBins * bins.stride) / bins.padded / sigStep
  const cornerChange =
    Math.hypot(later[0] - 4 * first[0], later[1] - 4 * first[1]) / (sigStep * sigStep) +
    tilt * Math.hypot(...corner) +
    // The trapezoid of a Gaussian of few samples, exact to exp(-2 pi^2/(sig dt)^2).
    scale * Math.hypot(first[0], first[1]) * Math.exp((-2 * Math.PI ** 2) / (sigStep * sigStep))
  const slice = (): ComplexSeries => {
    const out = keptTransform(signal, 0, bins)
    for (let i = 0; i < out.re.length; i++) {
      out.re[i]! -= corner[0]
      out.im[i]! -= corner[1]
    }
    return out
  }
  return { slice, error: size > 0 ? (curvature + cornerChange) / size : Infinity }
}

/** Bins counted from E0. */
const offsetsOf = ({ halfBins, stride }: MapBins): Int32Array =>
  Int32Array.from({ length: 2 * halfBins }, (_, i) => (i - halfBins) * stride)

/** A slice from its projection, end-corrected like the map. */
const corrected = (
  projection: ComplexSeries,
  first: number,
  bins: MapBins,
  correction: EdgeCorrection | undefined,
  across: boolean,
): ComplexSeries => {
  const slice = keptTransform(projection, first, bins)
  const offsets = offsetsOf(bins)
  correction?.addAt(slice, across ? offsets.map((bin) => -bin) : offsets, offsets)
  return slice
}

/** The rephasing cross-diagonal alone: what the preview draws. `onSum` is made when it is not at hand. */
export const rephasingCrossDiagonal = (
  tables: SignalTables,
  bins: MapBins,
  onSum?: ComplexSeries,
  correction?: EdgeCorrection,
): { slice: ComplexSeries; method: SliceMethod } => {
  const reduction = reducedCrossDiagonal(tables, bins)
  const band = Math.min(tables.samples, bandSamples(tables))
  const reductionError = reduction?.error ?? null
  if (reduction && reduction.error <= REDUCTION_TOLERANCE) {
    return { slice: reduction.slice(), method: { method: 'reduction', reductionError, band } }
  }
  const projection = onSum ?? projections(tables, false).onSum
  const edges = correction ?? edgeCorrection(tables, bins.padded)
  return { slice: corrected(projection, 0, bins, edges, true), method: { method: 'band', reductionError, band } }
}

/** Bins of the two directions, of one padded length. */
export interface SliceBins {
  across: MapBins
  along: MapBins
}

/** All slices of one waiting time. */
export const mapSlices = ({ rephasing, nonRephasing }: MapTables, { across, along }: SliceBins): Slices => {
  const first = 1 - rephasing.samples
  const r = projections(rephasing)
  const s = projections(nonRephasing)
  const rEdges = edgeCorrection(rephasing, across.padded)
  const sEdges = edgeCorrection(nonRephasing, across.padded)
  const { slice, method } = rephasingCrossDiagonal(rephasing, across, r.onSum, rEdges)
  return {
    crossDiagonal: { rephasing: slice, nonRephasing: corrected(s.onDifference, first, across, sEdges, true) },
    diagonal: {
      rephasing: corrected(r.onDifference, first, along, rEdges, false),
      nonRephasing: corrected(s.onSum, 0, along, sEdges, false),
    },
    method,
  }
}

export const absorptiveOf = (rephasing: ComplexSeries, nonRephasing: ComplexSeries): Float64Array =>
  rephasing.re.map((value, i) => value + nonRephasing.re[i]!)
