/**
 * Self-check of a run: the fast kernel against the plain one (`oracle.ts`) for the same model, at the first waiting time, on a
 * grid of 24 x 24 samples that covers the same window, at five bins. Table building, factors, kernel and bins are those of the
 * run; only the number of samples differs. Cost: about 3000 pathways, a few milliseconds.
 */
import { Complex } from 'complex.js'
import type { SpectralGrid } from './grid'
import { lineBroadeningAt } from './line-broadening'
import { signalMap } from './map-kernel'
import { mapTables } from './map-tables'
import { oracleSpectra } from './oracle'
import type { ComplexSeries, LineModel } from './types'

const SAMPLES = 24
const PADDED = 32
const POINTS = [
  [0, 0],
  [1, 1],
  [-2, 3],
  [5, -4],
  [-7, -6],
] as const
/** Rounding of 24 x 24 sums and of logarithms up to 300 stays far below this. */
export const SELF_CHECK_TOLERANCE = 1e-10

/** Largest difference of both spectra at the five bins, as a fraction of the largest value among them. */
export const selfCheck = (model: LineModel, grid: SpectralGrid, waitingTimePs: number): number => {
  const stepPs = (grid.samples * grid.timeStepPs) / SAMPLES
  const at = (count: number, from: number): ComplexSeries =>
    lineBroadeningAt(
      model,
      model.temperatureK,
      Float64Array.from({ length: count }, (_, j) => from + j * stepPs),
    )
  const atTimes = at(2 * SAMPLES - 1, 0)
  const atWait = at(2 * SAMPLES - 1, waitingTimePs)
  const early = { re: atTimes.re.subarray(0, SAMPLES), im: atTimes.im.subarray(0, SAMPLES) }
  const tables = mapTables(model, waitingTimePs, stepPs, { atTimes: early, atWait })
  const bins = { padded: PADDED, halfBins: PADDED / 2, stride: 1 }
  const fast = [signalMap(tables.rephasing, bins), signalMap(tables.nonRephasing, bins)]

  /** All times of the pathways are j dt or t2 + j dt. */
  const lookUp = (time: number): Complex => {
    const later = (time - waitingTimePs) / stepPs
    const index = Math.round(later)
    const onLater = index >= 0 && Math.abs(later - index) < 1e-6
    const table = onLater ? atWait : atTimes
    const place = onLater ? index : Math.round(time / stepPs)
    return new Complex(table.re[place]!, table.im[place]!)
  }
  const unit = (2 * Math.PI) / (PADDED * stepPs)
  const plain = oracleSpectra(
    model,
    lookUp,
    { stepPs, samples: SAMPLES, waitingTimePs },
    POINTS.map(([m1, m3]) => ({ w1: m1 * unit, w3: m3 * unit })),
  )
  let largest = 0
  let worst = 0
  POINTS.forEach(([m1, m3], i) => {
    const place = (m1 + PADDED / 2) * PADDED + m3 + PADDED / 2
    const { rephasing, nonRephasing } = plain[i]!
    ;[rephasing, nonRephasing].forEach((value, which) => {
      largest = Math.max(largest, value.abs())
      worst = Math.max(worst, value.sub(fast[which]!.re[place]!, fast[which]!.im[place]!).abs())
    })
  })
  return largest > 0 ? worst / largest : worst
}
