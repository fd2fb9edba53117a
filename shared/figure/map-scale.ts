import { linearTicks, type AxisTicks, type Range } from './ticks'
import { formatPlain } from './format'

/** From value to drawn value, -1..1 for signed maps and 0..1 for others, and what the colour bar says. */
export interface ValueScale {
  toShare: (value: number) => number
  /** Range of the values on the colour bar. */
  range: Range
  /** Ticks of the colour bar; `major` are values. */
  ticks: AxisTicks
}

/** Share of the reach below which the compressed scale is linear. */
const linearShare = 0.01

/** Ticks of the compressed scale: the reach, a tenth and a hundredth of it, and zero; rounded to one digit. */
const compressedTicks = (reach: number, signed: boolean): AxisTicks => {
  const sizes = [1, 0.1, 0.01].map((share) => Number((share * reach).toPrecision(1))).filter((size) => size <= reach)
  const largest = Number(reach.toPrecision(2))
  const positive = [...new Set([...(largest <= reach ? [largest] : []), ...sizes])].slice(0, 4)
  const major = [...(signed ? positive.map((size) => -size) : []), 0, ...[...positive].reverse()]
  return { major, minor: [], labels: major.map(formatPlain), factorExponent: 0 }
}

export const valueScaleOf = (kind: 'linear' | 'asinh', reach: number, signed: boolean, length: number): ValueScale => {
  const top = reach > 0 ? reach : 1
  const range = { low: signed ? -top : 0, high: top }
  if (kind === 'linear') {
    const ticks = linearTicks(range, Math.max(2, Math.round(length / 70)), length)
    return { toShare: (value) => value / top, range, ticks }
  }
  const core = linearShare * top
  const whole = Math.asinh(top / core)
  return { toShare: (value) => Math.asinh(value / core) / whole, range, ticks: compressedTicks(top, signed) }
}
