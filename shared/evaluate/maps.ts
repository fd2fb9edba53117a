/** Answers of the command line about two-dimensional spectra, relative to the rephasing maximum. */
import type { RequestOf } from '../schemas/engine-request'
import { PLANCK_MEV_PS } from '../engine/constants'
import { chooseMapGrid } from '../engine/grid'
import { mapAt, mapSampledAt, tablesOn, type EnergyPair, type MapValues } from '../engine/map-at'
import { signalMap } from '../engine/map-kernel'
import type { MapBins } from '../engine/map'
import type { SignalTables } from '../engine/map-tables'
import { binEnergies, mapBins } from '../engine/stages'
import type { ComplexSeries, LineModel } from '../engine/types'
import { EngineRefusal, type Answer } from './answer'
import { split, toModel } from './line-shapes'

const modulusAt = ({ re, im }: ComplexSeries, i: number): number => Math.hypot(re[i]!, im[i]!)

const indexOfLargest = (series: ComplexSeries): number => {
  let best = 0
  for (let i = 1; i < series.re.length; i++) if (modulusAt(series, i) > modulusAt(series, best)) best = i
  return best
}

/** Offsets from E0 of the largest point of a rephasing map on its bins. */
const largestOffset = (tables: SignalTables, bins: MapBins, spanMeV: number): EnergyPair => {
  const energies = binEnergies(bins, spanMeV)
  const best = indexOfLargest(signalMap(tables, bins))
  return [energies[Math.floor(best / energies.length)]!, energies[best % energies.length]!]
}

const relativeValues = ({ rephasing, nonRephasing }: MapValues, modulus: number) => {
  const scaled = ({ re, im }: ComplexSeries): ComplexSeries => ({
    re: re.map((value) => value / modulus),
    im: im.map((value) => value / modulus),
  })
  const r = scaled(rephasing)
  const n = scaled(nonRephasing)
  return { rephasing: split(r), nonRephasing: split(n), absorptive: [...r.re.map((value, i) => value + n.re[i]!)] }
}

/** Offsets of a 3 x 3 stencil. */
const stencil = [-1, 0, 1].flatMap((i) => [-1, 0, 1].map((j): [number, number] => [i, j]))

/** Derivatives of the quadratic through nine values on the stencil, in steps. */
const quadraticOf = (f: readonly number[]) => {
  const at = (i: number, j: number) => f[3 * (i + 1) + (j + 1)]!
  return {
    value: at(0, 0),
    g1: (at(1, 0) - at(-1, 0)) / 2,
    g3: (at(0, 1) - at(0, -1)) / 2,
    h11: at(1, 0) - 2 * at(0, 0) + at(-1, 0),
    h33: at(0, 1) - 2 * at(0, 0) + at(0, -1),
    h13: (at(1, 1) - at(1, -1) - at(-1, 1) + at(-1, -1)) / 4,
  }
}

/** Place of the quadratic's maximum in steps from the middle, at most two of them away. */
const vertexOf = (f: readonly number[]): [number, number] => {
  const { g1, g3, h11, h33, h13 } = quadraticOf(f)
  const determinant = h11 * h33 - h13 * h13
  if (!(determinant > 0)) return [0, 0]
  const clamp = (value: number) => Math.max(-2, Math.min(2, value))
  return [clamp((h13 * g3 - h33 * g1) / determinant), clamp((h13 * g1 - h11 * g3) / determinant)]
}

const quadraticAt = (f: readonly number[], x: number, y: number): number => {
  const { value, g1, g3, h11, h33, h13 } = quadraticOf(f)
  return value + g1 * x + g3 * y + (h11 * x * x + h33 * y * y) / 2 + h13 * x * y
}

/** Rounds of ever smaller stencils: the tolerance of their values and their step in widths of the zero-phonon line. */
const ROUNDS = [
  { tolerance: 1e-4, widths: 0.15 },
  { tolerance: 1e-5, widths: 0.06 },
  { tolerance: 1e-6, widths: 0.03 },
] as const
/** The last stencil holds the maximum well inside, so that the quadratic's own error is below 1e-8 there. */
const LAST_WIDTHS = 0.01

/** Maximum of |S_R|, from the grid's largest bin by quadratic steps, and the accurate values asked for. */
const valuesWithMaximum = (model: LineModel, waitingTimePs: number, points: readonly EnergyPair[]) => {
  const choice = chooseMapGrid(model, waitingTimePs)
  if (!choice.ok) throw new EngineRefusal('parameters', choice.issues.map(({ message }) => message).join('; '))
  const { grid } = choice
  const tables = tablesOn(model, waitingTimePs, grid.timeStepPs, grid.samples)
  const e0 = model.zeroPhononEnergyMeV
  // The line's own scale: its energy step resolves it ten times.
  const width = 10 * grid.energyStepMeV
  let [x, y] = largestOffset(tables.rephasing, mapBins(grid), grid.spanMeV)
  const around = (step: number) => stencil.map(([i, j]): EnergyPair => [e0 + x + i * step, e0 + y + j * step])
  for (const { tolerance, widths } of ROUNDS) {
    const step = widths * width
    const { rephasing } = mapAt(model, waitingTimePs, around(step), tolerance)
    const [dx, dy] = vertexOf(stencil.map((_, i) => modulusAt(rephasing, i)))
    x += dx * step
    y += dy * step
  }
  const step = LAST_WIDTHS * width
  const found = mapAt(model, waitingTimePs, [...points, ...around(step)], TOLERANCE)
  const tail = (values: Float64Array) => [...values.subarray(points.length)]
  const re = tail(found.rephasing.re)
  const im = tail(found.rephasing.im)
  const [dx, dy] = vertexOf(re.map((value, i) => Math.hypot(value, im[i]!)))
  const realPs2 = quadraticAt(re, dx, dy)
  const imagPs2 = quadraticAt(im, dx, dy)
  return {
    found,
    maximum: {
      E1MeV: e0 + x + dx * step,
      E3MeV: e0 + y + dy * step,
      modulusPs2: Math.hypot(realPs2, imagPs2),
      realPs2,
      imagPs2,
    },
  }
}

const UNIT = '1 (relative to the modulus of the rephasing spectrum at its maximum)'
const TOLERANCE = 2e-8

export const answerMap = ({ parameters, samples }: RequestOf<'twoDimensionalSpectra'>): Answer => {
  const { waitingTimePs, ...rest } = parameters
  const model = toModel(rest)
  const { found, maximum } = valuesWithMaximum(model, waitingTimePs, samples.points)
  const kept = ({ re, im }: ComplexSeries): ComplexSeries => ({
    re: re.subarray(0, samples.points.length),
    im: im.subarray(0, samples.points.length),
  })
  const values = { rephasing: kept(found.rephasing), nonRephasing: kept(found.nonRephasing) }
  return {
    values: { unit: UNIT, ...relativeValues(values, maximum.modulusPs2), rephasingMaximum: maximum },
    diagnostics: { errorEstimate: found.errorEstimate, timeStepPs: found.stepPs, samples: found.samples },
  }
}

export const answerMapSampled = ({ parameters, samples }: RequestOf<'twoDimensionalSpectraSampled'>): Answer => {
  const { waitingTimePs, samples: count, timeStepPs, ...rest } = parameters
  const model = toModel(rest)
  const bin = PLANCK_MEV_PS / (count * timeStepPs)
  const at = (bins: readonly (readonly [number, number])[]) =>
    mapSampledAt(
      model,
      waitingTimePs,
      timeStepPs,
      count,
      bins.map(([m1, m3]): EnergyPair => [model.zeroPhononEnergyMeV + m1 * bin, model.zeroPhononEnergyMeV + m3 * bin]),
    )
  // The same sums on a padded power of two show where the largest bin lies; its neighbours settle which one it is.
  const padded = 2 ** Math.ceil(Math.log2(count))
  const { rephasing } = tablesOn(model, waitingTimePs, timeStepPs, count)
  const offset = largestOffset(rephasing, { padded, halfBins: padded / 2, stride: 1 }, PLANCK_MEV_PS / timeStepPs)
  const middle = offset.map((energy) => Math.round(energy / bin)) as [number, number]
  const near = [-1, 0, 1].flatMap((i) => [-1, 0, 1].map((j): [number, number] => [middle[0] + i, middle[1] + j]))
  const candidates = at(near).rephasing
  const best = indexOfLargest(candidates)
  const modulusPs2 = modulusAt(candidates, best)
  return {
    values: {
      unit: '1 (relative to the modulus of the rephasing map at its largest bin)',
      ...relativeValues(at(samples.points), modulusPs2),
      rephasingMaximum: {
        bins: near[best]!,
        modulusPs2,
        realPs2: candidates.re[best]!,
        imagPs2: candidates.im[best]!,
      },
    },
  }
}
