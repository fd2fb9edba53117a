import type { MapFigure } from './map-description'
import type { Range } from './ticks'

/** A rectangular part of a map: values row-major along energy 1, sample k at start + k * step. */
export interface MapPart {
  values: Float64Array
  count1: number
  count3: number
  start1: number
  start3: number
  step1: number
  step3: number
}

const stepOf = (axis: Float64Array): number =>
  axis.length > 1 ? ((axis[axis.length - 1] as number) - (axis[0] as number)) / (axis.length - 1) : 1

const within = (axis: Float64Array, range: Range | undefined): [first: number, last: number] => {
  const lastIndex = axis.length - 1
  if (!range || axis.length === 0) return [0, lastIndex]
  const step = stepOf(axis)
  const origin = axis[0] as number
  // One sample beyond either end, so that colours and contours run into the frame.
  const first = Math.max(0, Math.floor((range.low - origin) / step) - 1)
  const last = Math.min(lastIndex, Math.ceil((range.high - origin) / step) + 1)
  return first <= last ? [first, last] : [0, lastIndex]
}

/** The part of the map that its ranges show. */
export const visiblePart = (figure: MapFigure): MapPart => {
  const { energies1, energies3, values } = figure
  const [first1, last1] = within(energies1, figure.range1)
  const [first3, last3] = within(energies3, figure.range3)
  const count1 = Math.max(0, last1 - first1 + 1)
  const count3 = Math.max(0, last3 - first3 + 1)
  const part = new Float64Array(count1 * count3)
  for (let i = 0; i < count1; i++) {
    const row = (first1 + i) * energies3.length + first3
    for (let j = 0; j < count3; j++) part[i * count3 + j] = values[row + j] as number
  }
  return {
    values: part,
    count1,
    count3,
    start1: energies1[first1] ?? 0,
    start3: energies3[first3] ?? 0,
    step1: stepOf(energies1),
    step3: stepOf(energies3),
  }
}

/** For every wanted sample: the sample below it, the one above, and the weight of the latter. */
const neighbours = (from: number, to: number) => {
  const scale = to > 1 ? (from - 1) / (to - 1) : 0
  const below = new Int32Array(to)
  const above = new Int32Array(to)
  const weight = new Float64Array(to)
  for (let k = 0; k < to; k++) {
    below[k] = Math.min(from - 1, Math.floor(k * scale))
    above[k] = Math.min(from - 1, (below[k] as number) + 1)
    weight[k] = k * scale - (below[k] as number)
  }
  return { scale, below, above, weight }
}

/** Bilinear resampling to other counts over the same samples; ends stay where they are. */
export const resample = (part: MapPart, count1: number, count3: number): MapPart => {
  if (count1 === part.count1 && count3 === part.count3) return part
  const values = new Float64Array(count1 * count3)
  const rows = neighbours(part.count1, count1)
  const columns = neighbours(part.count3, count3)
  // One axis after the other: a row between two rows first, then the samples along it.
  const between = new Float64Array(part.count3)
  for (let i = 0; i < count1; i++) {
    const low = (rows.below[i] as number) * part.count3
    const high = (rows.above[i] as number) * part.count3
    const f = rows.weight[i] as number
    for (let j = 0; j < part.count3; j++) {
      between[j] = (part.values[low + j] as number) * (1 - f) + (part.values[high + j] as number) * f
    }
    for (let j = 0; j < count3; j++) {
      const g = columns.weight[j] as number
      values[i * count3 + j] =
        (between[columns.below[j] as number] as number) * (1 - g) + (between[columns.above[j] as number] as number) * g
    }
  }
  return { ...part, values, count1, count3, step1: part.step1 * rows.scale, step3: part.step3 * columns.scale }
}

/** Sides between which a map is painted, whatever its size on the page. */
const paintSide = { min: 320, max: 768 }
const contourSide = 256

/** Image pixels to a pixel of the page: sharp on dense screens, and no more than twice what any screen shows. */
const pixelDensity = 1.5

/** The part at the resolution it is painted with in a frame of that width; `oversampling` times finer on request. */
export const paintable = (part: MapPart, width: number, oversampling = 1): MapPart => {
  const wanted = Math.round(Math.max(paintSide.min, pixelDensity * width)) * oversampling
  const side = Math.min(paintSide.max, wanted)
  return resample(part, part.count1 < 2 ? part.count1 : side, part.count3 < 2 ? part.count3 : side)
}

/** Means of two by two samples. Drawing means instead of samples keeps a thin zero line from breaking into beads. */
export const halve = (part: MapPart): MapPart => {
  const count1 = part.count1 >> 1
  const count3 = part.count3 >> 1
  const values = new Float64Array(count1 * count3)
  for (let i = 0; i < count1; i++) {
    for (let j = 0; j < count3; j++) {
      const at = 2 * i * part.count3 + 2 * j
      const below = at + part.count3
      const row = (part.values[at] as number) + (part.values[at + 1] as number)
      values[i * count3 + j] = (row + (part.values[below] as number) + (part.values[below + 1] as number)) / 4
    }
  }
  return {
    values,
    count1,
    count3,
    start1: part.start1 + part.step1 / 2,
    start3: part.start3 + part.step3 / 2,
    step1: 2 * part.step1,
    step3: 2 * part.step3,
  }
}

/** The part at the resolution contours are traced on. */
export const contourable = (part: MapPart): MapPart =>
  resample(part, Math.min(part.count1, contourSide), Math.min(part.count3, contourSide))

/** Largest magnitude of a map; 0 for an empty one. */
export const reachOf = (values: ArrayLike<number>): number => {
  let reach = 0
  for (let i = 0; i < values.length; i++) {
    const size = Math.abs(values[i] as number)
    if (size > reach) reach = size
  }
  return reach
}

/** Index of the value of largest magnitude. */
export const largestAt = (values: ArrayLike<number>): number => {
  let best = 0
  for (let i = 1; i < values.length; i++) {
    if (Math.abs(values[i] as number) > Math.abs(values[best] as number)) best = i
  }
  return best
}

/**
 * The square region in which something happens: where the magnitude passes `threshold` of its maximum, with a margin,
 * centred on the same energy on both axes so that the diagonal runs from corner to corner.
 */
export const interestingRange = (
  energies1: Float64Array,
  energies3: Float64Array,
  values: ArrayLike<number>,
  threshold = 0.02,
): Range => {
  const level = threshold * reachOf(values)
  let low = Infinity
  let high = -Infinity
  for (let i = 0; i < energies1.length; i++) {
    for (let j = 0; j < energies3.length; j++) {
      if (!(Math.abs(values[i * energies3.length + j] as number) >= level)) continue
      low = Math.min(low, energies1[i] as number, energies3[j] as number)
      high = Math.max(high, energies1[i] as number, energies3[j] as number)
    }
  }
  const first = Math.max(energies1[0] ?? 0, energies3[0] ?? 0)
  const last = Math.min(energies1[energies1.length - 1] ?? 1, energies3[energies3.length - 1] ?? 1)
  if (level === 0 || !(high > low)) return { low: first, high: last }
  const margin = 0.12 * (high - low)
  return { low: Math.max(first, low - margin), high: Math.min(last, high + margin) }
}
