/**
 * End correction of a sampled two-dimensional spectrum.
 *
 * Sampling t1 with step dt adds the images of the spectrum at w + m Omega, Omega = 2 pi/dt. Far from the line they are given by the
 * signal at the edge t1 = 0: Int_0^inf f e^{iwt} dt ~ i f(0)/w - f'(0)/w^2 - i f''(0)/w^3, so that their sums over m != 0 are closed,
 *   A f = i c0(w) f(0) - c1(w) f'(0) - i c2(w) f''(0),
 *   c0 = h cot z - 1/w,  c1 = h^2/sin^2 z - 1/w^2,  c2 = h^3 cos z/sin^3 z - 1/w^3,  h = dt/2, z = w h.
 * (c0 = -w dt^2/12 and c1 = dt^2/12 for small w are the first Euler-Maclaurin terms.) With a trapezoid T = I + A on either axis
 *   I1 I3 = T1 T3 - A1 T3 - T1 A3 + A1 A3,
 * that is three transforms of each edge and a sum of six products a point. The derivatives at the edges are six-point
 * differences. Rephasing has exp(-i w1 t1): c0 and c2 change sign there.
 *
 * Source: Poisson summation; Davis & Rabinowitz, Methods of Numerical Integration, 2nd ed. (1984), 2.9. Brings the sampled
 * map from second order in dt to fourth (tests/engine/map.spec.ts).
 */
import { transformBatch } from './kernel/batch-transform'
import type { MapBins } from './map'
import type { SignalTables } from './map-tables'
import type { ComplexSeries } from './types'

const ORDERS = 3

const seriesOf = (length: number): ComplexSeries => ({ re: new Float64Array(length), im: new Float64Array(length) })

/** One-sided differences through six samples: first and second derivative at the first, in units of 1/dt and 1/dt^2. */
const FIRST = [-137 / 60, 5, -5, 10 / 3, -5 / 4, 1 / 5]
const SECOND = [15 / 4, -77 / 6, 107 / 6, -13, 61 / 12, -5 / 6]

/** c0, c1, c2 at angular frequency w (rad/ps), written to out[at ..]. */
const imageSums = (w: number, stepPs: number, out: Float64Array, at: number): void => {
  const h = stepPs / 2
  const z = w * h
  const q = z * z
  if (Math.abs(z) < 0.3) {
    out[at] = (-z * h * (1 + q * (1 / 15 + q * (2 / 315 + q / 1575)))) / 3
    out[at + 1] = h * h * (1 / 3 + q * (1 / 15 + q * (2 / 189 + q / 675)))
    out[at + 2] = -(h ** 3) * z * (1 / 15 + q * (4 / 189 + q / 225))
    return
  }
  const s = 1 / Math.sin(z)
  const c = Math.cos(z) * s
  out[at] = h * (c - 1 / z)
  out[at + 1] = h * h * (s * s - 1 / q)
  out[at + 2] = h ** 3 * (c * s * s - 1 / (z * q))
}

/** The factors i c0, -c1, -i c2 of value, first and second derivative, as [re, im]. */
export const imageFactors = (w: number, stepPs: number): [number, number][] => {
  const sums = new Float64Array(ORDERS)
  imageSums(w, stepPs, sums, 0)
  return [
    [0, sums[0]!],
    [-sums[1]!, 0],
    [0, -sums[2]!],
  ]
}

/**
 * Signal without the half weights of first samples (dt^2 is in it) along one axis at sample `fixed` of the other one:
 * all t3 at t1 = fixed dt, or all t1 at t3 = fixed dt.
 */
const bareLine = (tables: SignalTables, fixed: number, third: boolean): ComplexSeries => {
  const { toeplitz, samples: n } = tables
  const { p, q, h } = tables.factors!
  const out = seriesOf(n)
  for (let j = 0; j < n; j++) {
    const i = third ? fixed : j
    const k = third ? j : fixed
    const scale = (i === 0 ? 2 : 1) * (k === 0 ? 2 : 1) * (toeplitz ? toeplitz[k - i + n - 1]! : 1)
    const ur = p.re[i]! * q.re[k]! - p.im[i]! * q.im[k]!
    const ui = p.re[i]! * q.im[k]! + p.im[i]! * q.re[k]!
    const hr = h.re[i + k]! * scale
    const hi = h.im[i + k]! * scale
    out.re[j] = ur * hr - ui * hi
    out.im[j] = ur * hi + ui * hr
  }
  return out
}

export interface Edges {
  /** Value, first and second derivative in t1 at t1 = 0, along t3; per dt of t3, no half weights. */
  along3: ComplexSeries[]
  /** The same in t3 at t3 = 0, along t1. */
  along1: ComplexSeries[]
  /** Mixed derivatives at the corner: [order in t1][order in t3], [re, im]. */
  corner: [number, number][][]
}

/** Edges of the signal; undefined where it has no factors. */
export const edgesOf = (tables: SignalTables): Edges | undefined => {
  const { samples: n, stepPs } = tables
  if (!tables.factors || n < 6) return undefined
  // dt^2 is inside the signal: one dt stays with the axis that is summed, the other one is taken out.
  const weights = [[1], FIRST, SECOND].map((list, order) => list.map((value) => value / stepPs ** (order + 1)))
  const along = (third: boolean): ComplexSeries[] => {
    const outs = weights.map(() => seriesOf(n))
    for (let m = 0; m < FIRST.length; m++) {
      const line = bareLine(tables, m, third)
      weights.forEach((list, order) => {
        const weight = list[m]
        if (weight === undefined) return
        const out = outs[order]!
        for (let j = 0; j < n; j++) {
          out.re[j]! += weight * line.re[j]!
          out.im[j]! += weight * line.im[j]!
        }
      })
    }
    return outs
  }
  const along3 = along(true)
  const corner = along3.map(({ re, im }) =>
    weights.map((list): [number, number] => {
      let a = 0
      let b = 0
      list.forEach((weight, m) => {
        a += weight * re[m]!
        b += weight * im[m]!
      })
      return [a, b]
    }),
  )
  return { along3, along1: along(false), corner }
}

/** Edges with the half weight of their first sample. */
const weighted = (edges: ComplexSeries[]): ComplexSeries[] =>
  edges.map(({ re, im }) => {
    const out = { re: re.slice(), im: im.slice() }
    out.re[0]! /= 2
    out.im[0]! /= 2
    return out
  })

/** The correction is sum_k left_k(m1) right_k(m3), twice `ORDERS` products: [k][point]. */
interface Products {
  left: ComplexSeries[]
  right: ComplexSeries[]
}

export interface EdgeCorrection {
  /** Adds the correction to values at pairs of bins (m1[i], m3[i]), counted from E0 in steps of the padded transform. */
  addAt: (values: ComplexSeries, m1: ArrayLike<number>, m3: ArrayLike<number>) => void
  /**
   * Adds it to a row-major map on the kept bins. Returns a bound of its last term, that of the second derivative: what is left
   * out is smaller, so this is the estimate of the discretisation error, in units of the values.
   */
  addToMap: (values: ComplexSeries, bins: MapBins) => number
}

/** -i c0, c1, i c2 at all bins. */
const factorSeries = (bins: ArrayLike<number>, unit: number, stepPs: number): ComplexSeries[] => {
  const series = Array.from({ length: ORDERS }, () => seriesOf(bins.length))
  const sums = new Float64Array(ORDERS)
  for (let i = 0; i < bins.length; i++) {
    imageSums(bins[i]! * unit, stepPs, sums, 0)
    series[0]!.im[i] = -sums[0]!
    series[1]!.re[i] = sums[1]!
    series[2]!.im[i] = sums[2]!
  }
  return series
}

/** Correction for the maps and slices of these tables; undefined where the signal has no factors. */
export const edgeCorrection = (tables: SignalTables, padded: number): EdgeCorrection | undefined => {
  const edges = edgesOf(tables)
  if (!edges) return undefined
  const { stepPs, rephasing } = tables
  const lines = [...weighted(edges.along3), ...weighted(edges.along1)]
  const unit = (2 * Math.PI) / (padded * stepPs)
  const wrap = (bin: number) => ((bin % padded) + padded) % padded
  const turn = rephasing ? -1 : 1

  /** -A1 (T3 - A3) - T1 A3, written as products. */
  const products = (m1: ArrayLike<number>, m3: ArrayLike<number>): Products => {
    const places3 = Int32Array.from(m3, wrap)
    const places1 = Int32Array.from(m1, (bin) => wrap(turn * bin))
    const spectra = transformBatch(
      lines,
      padded,
      lines.map((_, k) => (k < ORDERS ? places3 : places1)),
    )
    // A3 of the edge is taken off in place: T3 - A3.
    const open = spectra.slice(0, ORDERS)
    const on1 = spectra.slice(ORDERS)
    const negative1 = factorSeries(m1, turn * unit, stepPs)
    const negative3 = factorSeries(m3, unit, stepPs)
    open.forEach((edge, order) =>
      negative3.forEach((factor, inner) => addScaled(edge.re, edge.im, ...edges.corner[order]![inner]!, factor)),
    )
    return { left: [...negative1, ...on1], right: [...open, ...negative3] }
  }

  return {
    addAt: (values, m1, m3) => {
      const { left, right } = products(m1, m3)
      left.forEach((a, order) => addProducts(values, a, right[order]!))
    },
    addToMap: (values, bins) => {
      const count = 2 * bins.halfBins
      const offsets = Int32Array.from({ length: count }, (_, i) => (i - bins.halfBins) * bins.stride)
      const { left, right } = products(offsets, offsets)
      for (let i = 0; i < count; i++) {
        const re = values.re.subarray(i * count, (i + 1) * count)
        const im = values.im.subarray(i * count, (i + 1) * count)
        left.forEach((a, order) => addScaled(re, im, a.re[i]!, a.im[i]!, right[order]!))
      }
      return [ORDERS - 1, 2 * ORDERS - 1].reduce(
        (sum, k) => sum + largestModulus(left[k]!) * largestModulus(right[k]!),
        0,
      )
    },
  }
}

/** Largest modulus of a complex series. */
export const largestModulus = ({ re, im }: ComplexSeries): number => {
  let most = 0
  for (let i = 0; i < re.length; i++) most = Math.max(most, Math.hypot(re[i]!, im[i]!))
  return most
}

const addProducts = (values: ComplexSeries, a: ComplexSeries, b: ComplexSeries): void => {
  for (let i = 0; i < a.re.length; i++) {
    values.re[i]! += a.re[i]! * b.re[i]! - a.im[i]! * b.im[i]!
    values.im[i]! += a.re[i]! * b.im[i]! + a.im[i]! * b.re[i]!
  }
}

const addScaled = (re: Float64Array, im: Float64Array, ar: number, ai: number, b: ComplexSeries): void => {
  for (let k = 0; k < re.length; k++) {
    re[k]! += ar * b.re[k]! - ai * b.im[k]!
    im[k]! += ar * b.im[k]! + ai * b.re[k]!
  }
}
