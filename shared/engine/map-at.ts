/**
 * Two-dimensional spectra at any pairs of energies: accurate values of the continuous double integral, and the plain sums
 * that a grid means.
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | E1, E3 | points | meV | [points][2] |
 * | S_R, S_N | rephasing, nonRephasing | ps^2 | [points] |
 *
 * Definitions and sources: `map.ts`, `edge-correction.ts`. `mapAt` sums on a grid whose span holds all but 1e-9 of the sidebands
 * and whose window leaves 1e-9 of the signal, with the end correction (fourth order in dt), and halves the step until two
 * answers agree. Cost: samples^2 for each distinct E3. Spec: tests/engine/map.spec.ts.
 */
import { decayWindow, echoDecay, ensembleSigma, homogeneousRate, linearDecay, withEnsemble } from './coherence-decay'
import { HBAR_MEV_PS, PLANCK_MEV_PS } from './constants'
import { edgesOf, imageFactors, type Edges } from './edge-correction'
import { decayTimes } from './grid'
import { lineBroadeningAt } from './line-broadening'
import { mapTables, type MapTables, type SignalTables } from './map-tables'
import { sidebandReach } from './sideband-reach'
import { signalRow } from './signal-row'
import type { ComplexSeries, LineModel } from './types'

export type EnergyPair = readonly [energy1MeV: number, energy3MeV: number]

export interface MapValues {
  rephasing: ComplexSeries
  nonRephasing: ComplexSeries
}

export interface AccurateMapValues extends MapValues {
  /** A quarter of the last refinement's largest change, as a fraction of the largest modulus asked for. */
  errorEstimate: number
  stepPs: number
  samples: number
}

type Complex = [re: number, im: number]

const turned = (series: ComplexSeries, w: number, stepPs: number): ComplexSeries => {
  const n = series.re.length
  const out = { re: new Float64Array(n), im: new Float64Array(n) }
  for (let j = 0; j < n; j++) {
    const c = Math.cos(w * j * stepPs)
    const s = Math.sin(w * j * stepPs)
    out.re[j] = series.re[j]! * c - series.im[j]! * s
    out.im[j] = series.re[j]! * s + series.im[j]! * c
  }
  return out
}

/** cos and sin of w t on the samples. */
const wave = (w: number, n: number, stepPs: number): ComplexSeries => ({
  re: Float64Array.from({ length: n }, (_, k) => Math.cos(w * k * stepPs)),
  im: Float64Array.from({ length: n }, (_, k) => Math.sin(w * k * stepPs)),
})

/**
 * Sums of the signal times exp(i w1 t1 + i w3 t3), with the weights of the tables, at every pair of frequencies. A row of
 * the signal is made once for all of them, and summed once for each distinct w3.
 */
const doubleSums = (tables: SignalTables, pairs: readonly (readonly [number, number])[]): Complex[] => {
  const { samples: n, stepPs } = tables
  const row = { re: new Float64Array(n), im: new Float64Array(n) }
  const distinct = [...new Set(pairs.map(([, w3]) => w3))]
  const waves = distinct.map((w3) => wave(w3, n, stepPs))
  const columns = pairs.map(([, w3]) => distinct.indexOf(w3))
  const a = new Float64Array(distinct.length)
  const b = new Float64Array(distinct.length)
  const sums = pairs.map((): Complex => [0, 0])
  for (let i = 0; i < n; i++) {
    signalRow(tables, i, row)
    waves.forEach(({ re, im }, column) => {
      let x = 0
      let y = 0
      for (let k = 0; k < n; k++) {
        x += row.re[k]! * re[k]! - row.im[k]! * im[k]!
        y += row.re[k]! * im[k]! + row.im[k]! * re[k]!
      }
      a[column] = x
      b[column] = y
    })
    pairs.forEach(([w1], index) => {
      const column = columns[index]!
      const c = Math.cos(w1 * i * stepPs)
      const s = Math.sin(w1 * i * stepPs)
      sums[index]![0] += a[column]! * c - b[column]! * s
      sums[index]![1] += a[column]! * s + b[column]! * c
    })
  }
  return sums
}

const trapezoid = (edge: ComplexSeries, w: number, stepPs: number): Complex => {
  const { re, im } = turned(edge, w, stepPs)
  let a = -re[0]! / 2
  let b = -im[0]! / 2
  for (let j = 0; j < re.length; j++) {
    a += re[j]!
    b += im[j]!
  }
  return [a, b]
}

/** -A1 T3 - T1 A3 + A1 A3 at one pair of frequencies. */
const correctionAt = (edges: Edges, w1: number, w3: number, stepPs: number): Complex => {
  const f1 = imageFactors(w1, stepPs)
  const f3 = imageFactors(w3, stepPs)
  let re = 0
  let im = 0
  f1.forEach(([ar, ai], order) => {
    let [br, bi] = trapezoid(edges.along3[order]!, w3, stepPs)
    f3.forEach(([fr, fi], inner) => {
      const [cr, ci] = edges.corner[order]![inner]!
      br -= fr * cr - fi * ci
      bi -= fr * ci + fi * cr
    })
    re -= ar * br - ai * bi
    im -= ar * bi + ai * br
    const [tr, ti] = trapezoid(edges.along1[order]!, w1, stepPs)
    const [fr, fi] = f3[order]!
    re -= fr * tr - fi * ti
    im -= fr * ti + fi * tr
  })
  return [re, im]
}

const signalAt = (tables: SignalTables, offsets: readonly EnergyPair[], corrected: boolean): ComplexSeries => {
  const out = { re: new Float64Array(offsets.length), im: new Float64Array(offsets.length) }
  const edges = corrected ? edgesOf(tables) : undefined
  const pairs = offsets.map(([e1, e3]): [number, number] => [
    ((tables.rephasing ? -1 : 1) * e1) / HBAR_MEV_PS,
    e3 / HBAR_MEV_PS,
  ])
  const sums = doubleSums(tables, pairs)
  pairs.forEach(([w1, w3], i) => {
    const [re, im] = sums[i]!
    const [a, b] = edges ? correctionAt(edges, w1, w3, tables.stepPs) : [0, 0]
    out.re[i] = re + a
    out.im[i] = im + b
  })
  return out
}

/** Tables on n samples of a step, all g0 by quadrature at the times needed. */
export const tablesOn = (model: LineModel, waitingTimePs: number, stepPs: number, samples: number): MapTables => {
  const at = (count: number, from: number) =>
    lineBroadeningAt(
      model,
      model.temperatureK,
      Float64Array.from({ length: count }, (_, j) => from + j * stepPs),
    )
  return mapTables(model, waitingTimePs, stepPs, {
    atTimes: at(samples, 0),
    atWait: at(2 * samples - 1, waitingTimePs),
  })
}

const offsetsFrom = (model: LineModel, points: readonly EnergyPair[]): EnergyPair[] =>
  points.map(([e1, e3]) => [e1 - model.zeroPhononEnergyMeV, e3 - model.zeroPhononEnergyMeV])

/** The plain trapezoid sums on t_j = j dt, j < samples, at any pairs of energies: no correction, no padding. */
export const mapSampledAt = (
  model: LineModel,
  waitingTimePs: number,
  stepPs: number,
  samples: number,
  points: readonly EnergyPair[],
): MapValues => {
  const tables = tablesOn(model, waitingTimePs, stepPs, samples)
  const offsets = offsetsFrom(model, points)
  return {
    rephasing: signalAt(tables.rephasing, offsets, false),
    nonRephasing: signalAt(tables.nonRephasing, offsets, false),
  }
}

const LOST = 1e-9
const CUT = 1e-9
const LARGEST_SAMPLES = 16384

const largestModulus = ({ rephasing, nonRephasing }: MapValues): number =>
  [rephasing, nonRephasing].reduce(
    (most, { re, im }) => re.reduce((value, a, i) => Math.max(value, Math.hypot(a, im[i]!)), most),
    0,
  )

const difference = (a: MapValues, b: MapValues): MapValues => {
  const minus = (x: ComplexSeries, y: ComplexSeries) => ({
    re: x.re.map((value, i) => value - y.re[i]!),
    im: x.im.map((value, i) => value - y.im[i]!),
  })
  return { rephasing: minus(a.rephasing, b.rephasing), nonRephasing: minus(a.nonRephasing, b.nonRephasing) }
}

/**
 * Values of the continuous double integral to `tolerance` times the largest modulus asked for. Throws RangeError when the
 * signal never decays; the error estimate says what was reached when the largest number of samples stops the refinement.
 */
export const mapAt = (
  model: LineModel,
  waitingTimePs: number,
  points: readonly EnergyPair[],
  tolerance = 1e-7,
): AccurateMapValues => {
  const gam = homogeneousRate(model)
  const bounds = sidebandReach(model)
  const reach = Math.max(bounds.above(LOST), bounds.below(LOST))
  const times = decayTimes(reach, model)
  const window = Math.max(
    decayWindow(withEnsemble(linearDecay(model, times), model), CUT, gam),
    decayWindow(echoDecay(model, times, waitingTimePs), CUT, 2 * gam),
  )
  if (!Number.isFinite(window))
    throw new RangeError('expected a homogeneous width above 0; found a signal that never decays')
  const offsets = offsetsFrom(model, points)
  const farthest = offsets.reduce((most, [a, b]) => Math.max(most, Math.abs(a), Math.abs(b)), 0)
  let stepPs = PLANCK_MEV_PS / (2 * (Math.max(reach, farthest) + 8 * model.zeroPhononFwhmMeV))
  const sig = ensembleSigma(model)
  if (sig > 0) stepPs = Math.min(stepPs, 0.6 / sig)
  const valuesOn = (step: number): MapValues => {
    const tables = tablesOn(model, waitingTimePs, step, Math.max(8, Math.ceil(window / step)))
    return {
      rephasing: signalAt(tables.rephasing, offsets, true),
      nonRephasing: signalAt(tables.nonRephasing, offsets, true),
    }
  }
  let coarse = valuesOn(stepPs)
  for (;;) {
    stepPs /= 2
    const fine = valuesOn(stepPs)
    // Fourth order promises a fifteenth of the change; a quarter of it is claimed.
    const errorEstimate = largestModulus(difference(fine, coarse)) / (4 * largestModulus(fine))
    const samples = Math.ceil(window / stepPs)
    if (errorEstimate <= tolerance || 2 * samples > LARGEST_SAMPLES) return { ...fine, errorEstimate, stepPs, samples }
    coarse = fine
  }
}
