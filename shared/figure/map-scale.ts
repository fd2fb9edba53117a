import { linearTicks, type AxisTicks, type Range } from './ticks'
import { formatPlain } from './format'

/** From value to drawn value, -1..1 for signed maps and 0..1 for others, and what the colour bar says. */
export interface ValueScale {
  toShare: (value: number) => number
  fromShare: (share: number) => number
  /** Range of the values on the colour bar. */
  range: Range
  /** Ticks of the colour bar; `major` are values. */
  ticks: AxisTicks
}

/** Share of the reach below which the compressed scale is linear. */
const linearShare = 0.01

/** Inverse hyperbolic sine to the absolute accuracy that colours need, at a third of the time of Math.asinh. */
const fastAsinh = (x: number): number => {
  const size = Math.abs(x)
  const value = Math.log(size + Math.sqrt(size * size + 1))
  return x < 0 ? -value : value
}

/** Ticks of the compressed scale: the reach, the powers of ten between it and the linear core, and zero. */
const compressedTicks = (reach: number, signed: boolean): AxisTicks => {
  const top = Number(reach.toPrecision(2))
  const positive = [top <= reach ? top : Number((reach * 0.995).toPrecision(2))]
  for (let order = Math.floor(Math.log10(reach)); 10 ** order >= 0.5 * linearShare * reach; order--) {
    const size = Number(`1e${order}`)
    // A power of ten just below the reach would print over it.
    if (size < 0.7 * reach) positive.push(size)
  }
  const major = [...(signed ? positive.map((size) => -size) : []), 0, ...[...positive].reverse()]
  return { major, minor: [], labels: major.map(formatPlain), factorExponent: 0 }
}

export const valueScaleOf = (kind: 'linear' | 'asinh', reach: number, signed: boolean, length: number): ValueScale => {
  const top = reach > 0 ? reach : 1
  const range = { low: signed ? -top : 0, high: top }
  if (kind === 'linear') {
    const ticks = linearTicks(range, Math.max(2, Math.round(length / 70)), length)
    return { toShare: (value) => value / top, fromShare: (share) => share * top, range, ticks }
  }
  const core = linearShare * top
  const whole = Math.asinh(top / core)
  return {
    toShare: (value) => fastAsinh(value / core) / whole,
    fromShare: (share) => core * Math.sinh(share * whole),
    range,
    ticks: compressedTicks(top, signed),
  }
}
