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

/** Bilinear resampling to other counts over the same samples; ends stay where they are. */
export const resample = (part: MapPart, count1: number, count3: number): MapPart => {
  if (count1 === part.count1 && count3 === part.count3) return part
  const values = new Float64Array(count1 * count3)
  const scale1 = count1 > 1 ? (part.count1 - 1) / (count1 - 1) : 0
  const scale3 = count3 > 1 ? (part.count3 - 1) / (count3 - 1) : 0
  const at = (i: number, j: number) => part.values[i * part.count3 + j] as number
  for (let i = 0; i < count1; i++) {
    const u = i * scale1
    const i0 = Math.min(part.count1 - 1, Math.floor(u))
    const i1 = Math.min(part.count1 - 1, i0 + 1)
    const f = u - i0
    for (let j = 0; j < count3; j++) {
      const v = j * scale3
      const j0 = Math.min(part.count3 - 1, Math.floor(v))
      const j1 = Math.min(part.count3 - 1, j0 + 1)
      const g = v - j0
      values[i * count3 + j] =
        (at(i0, j0) * (1 - g) + at(i0, j1) * g) * (1 - f) + (at(i1, j0) * (1 - g) + at(i1, j1) * g) * f
    }
  }
  return { ...part, values, count1, count3, step1: part.step1 * scale1, step3: part.step3 * scale3 }
}

/** Sides between which a map is painted: fewer are interpolated up, more are interpolated down. */
const paintSide = { min: 320, max: 768 }
const contourSide = 256

const bounded = (count: number, min: number, max: number): number =>
  count < 2 ? count : Math.min(max, Math.max(min, count))

/** The part at the resolution it is painted with. */
export const paintable = (part: MapPart): MapPart =>
  resample(part, bounded(part.count1, paintSide.min, paintSide.max), bounded(part.count3, paintSide.min, paintSide.max))

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
