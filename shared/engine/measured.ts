/**
 * Measured quantities of a curve: the same module for a simulation and for a measurement.
 *
 * - Peak: the highest point, refined by the parabola through it and its neighbours.
 * - FWHM: from the global maximum outward to the first half-maximum crossing on either side (baseline 0), interpolated by the
 *   cubic through the four points around the crossing, never snapped to the grid.
 * - Moments: trapezoid sums over the range of the curve; the second and third are central.
 *
 * These are the definitions; nothing is fitted. Energies in meV, ascending, any spacing. What a curve does not define is null with a reason.
 * Spec: tests/engine/measured.spec.ts.
 */
import type { MeasuredQuantity } from '../schemas/run'

export interface Curve {
  energiesMeV: Float64Array
  values: Float64Array
}

export interface Peak {
  index: number
  energyMeV: number
  value: number
}

export interface Width {
  fwhmMeV: number
  leftMeV: number
  rightMeV: number
}

export type Missing = { reason: string }
export const isMissing = (value: object): value is Missing => 'reason' in value

export const quantityOf = (
  key: string,
  name: string,
  unit: string,
  value: number | null,
  reason?: string,
): MeasuredQuantity =>
  value !== null && Number.isFinite(value)
    ? { key, name, unit, value }
    : { key, name, unit, value: null, reason: reason ?? 'the value is not finite' }

/** Value at x of the polynomial through `count` points from index `first` (Neville). */
const polynomialAt = (curve: Curve, first: number, count: number, x: number): number => {
  const column = Array.from(curve.values.subarray(first, first + count))
  const nodes = curve.energiesMeV
  for (let level = 1; level < count; level++) {
    for (let i = 0; i + level < count; i++) {
      const a = nodes[first + i]!
      const b = nodes[first + i + level]!
      column[i] = ((x - a) * column[i + 1]! - (x - b) * column[i]!) / (b - a)
    }
  }
  return column[0]!
}

export const peakOf = (curve: Curve): Peak | Missing => {
  const { energiesMeV, values } = curve
  if (values.length < 3) return { reason: 'fewer than three points' }
  let index = 0
  for (let i = 1; i < values.length; i++) if (values[i]! > values[index]!) index = i
  const value = values[index]!
  if (!(value > 0)) return { reason: 'no positive value' }
  if (index === 0 || index === values.length - 1) {
    return { reason: 'the largest value is at the end of the range' }
  }
  // Newton form of the parabola through the three points.
  const x0 = energiesMeV[index - 1]!
  const x1 = energiesMeV[index]!
  const x2 = energiesMeV[index + 1]!
  const s01 = (value - values[index - 1]!) / (x1 - x0)
  const s12 = (values[index + 1]! - value) / (x2 - x1)
  const bend = (s12 - s01) / (x2 - x0)
  if (!(bend < 0)) return { index, energyMeV: x1, value }
  const energyMeV = Math.min(x2, Math.max(x0, (x0 + x1) / 2 - s01 / (2 * bend)))
  const top = value + (energyMeV - x1) * (s01 + bend * (energyMeV - x0))
  return { index, energyMeV, value: Math.max(top, value) }
}

/** Where the curve crosses `level` between i and i + 1. */
const crossing = (curve: Curve, i: number, level: number): number => {
  const { energiesMeV, values } = curve
  const first = Math.min(Math.max(0, i - 1), Math.max(0, values.length - 4))
  const count = Math.min(4, values.length)
  let from = energiesMeV[i]!
  let to = energiesMeV[i + 1]!
  const rising = values[i + 1]! > values[i]!
  for (let step = 0; step < 60 && to - from > 1e-14 * Math.abs(to); step++) {
    const middle = (from + to) / 2
    const below = polynomialAt(curve, first, count, middle) < level
    if (below === rising) from = middle
    else to = middle
  }
  return (from + to) / 2
}

export const widthOf = (curve: Curve, peak: Peak): Width | Missing => {
  const { values } = curve
  const level = peak.value / 2
  let left = peak.index
  while (left >= 0 && values[left]! > level) left--
  let right = peak.index
  while (right < values.length && values[right]! > level) right++
  if (left < 0 || right >= values.length) {
    return { reason: `the curve does not fall to half its maximum on the ${left < 0 ? 'low' : 'high'}-energy side` }
  }
  const leftMeV = crossing(curve, left, level)
  const rightMeV = crossing(curve, right - 1, level)
  return { fwhmMeV: rightMeV - leftMeV, leftMeV, rightMeV }
}

export interface CurveMoments {
  area: number
  meanMeV: number
  varianceMeV2: number
  thirdMeV3: number
}

export const momentsOf = ({ energiesMeV, values }: Curve): CurveMoments | Missing => {
  const sum = (weight: (energy: number) => number): number => {
    let total = 0
    for (let i = 1; i < values.length; i++) {
      const width = energiesMeV[i]! - energiesMeV[i - 1]!
      total += 0.5 * width * (weight(energiesMeV[i - 1]!) * values[i - 1]! + weight(energiesMeV[i]!) * values[i]!)
    }
    return total
  }
  const area = sum(() => 1)
  if (!(area > 0)) return { reason: 'the area is not positive' }
  const origin = energiesMeV[0]!
  const meanMeV = origin + sum((energy) => energy - origin) / area
  return {
    area,
    meanMeV,
    varianceMeV2: sum((energy) => (energy - meanMeV) ** 2) / area,
    thirdMeV3: sum((energy) => (energy - meanMeV) ** 3) / area,
  }
}

/** Peak, width and moments of a spectrum. `unit` is that of its values. */
export const curveQuantities = (curve: Curve, unit: string): MeasuredQuantity[] => {
  const peak = peakOf(curve)
  const moments = momentsOf(curve)
  const list: MeasuredQuantity[] = []
  if (isMissing(peak)) {
    list.push(
      quantityOf('peakEnergy', 'peak energy', 'meV', null, peak.reason),
      quantityOf('peakValue', 'peak height', unit, null, peak.reason),
      quantityOf('fwhm', 'full width at half maximum', 'meV', null, peak.reason),
    )
  } else {
    const width = widthOf(curve, peak)
    list.push(
      quantityOf('peakEnergy', 'peak energy', 'meV', peak.energyMeV),
      quantityOf('peakValue', 'peak height', unit, peak.value),
      isMissing(width)
        ? quantityOf('fwhm', 'full width at half maximum', 'meV', null, width.reason)
        : quantityOf('fwhm', 'full width at half maximum', 'meV', width.fwhmMeV),
    )
  }
  const moment = (key: string, name: string, momentUnit: string, of: (value: CurveMoments) => number) =>
    isMissing(moments)
      ? quantityOf(key, name, momentUnit, null, moments.reason)
      : quantityOf(key, name, momentUnit, of(moments))
  list.push(
    moment('firstMoment', 'first moment over the range', 'meV', (value) => value.meanMeV),
    moment('variance', 'variance over the range', 'meV²', (value) => value.varianceMeV2),
    moment('thirdMoment', 'third central moment over the range', 'meV³', (value) => value.thirdMeV3),
  )
  return list
}

/** FWHM of one slice, null with its reason where there is none. */
export const sliceWidth = (key: string, name: string, curve: Curve): MeasuredQuantity => {
  const peak = peakOf(curve)
  if (isMissing(peak)) return quantityOf(key, name, 'meV', null, peak.reason)
  const width = widthOf(curve, peak)
  return isMissing(width)
    ? quantityOf(key, name, 'meV', null, width.reason)
    : quantityOf(key, name, 'meV', width.fwhmMeV)
}
