import { ticks as niceTicks } from 'd3-array'
import { formatPlain, powerOfTen, withMinus } from './format'

export interface Range {
  low: number
  high: number
}

/** Ticks of one axis in the coordinate that is drawn (log axes are drawn in decades). */
export interface AxisTicks {
  major: number[]
  minor: number[]
  labels: string[]
  /** A common power of ten taken out of the labels and named in the axis title. */
  factorExponent: number
}

const decimalsOf = (step: number): number => Math.max(0, -Math.floor(Math.log10(step) + 1e-9))

/** `length` in pixels: minor ticks closer than four pixels are left out. */
export const linearTicks = (range: Range, wanted: number, length = Infinity): AxisTicks => {
  const major = niceTicks(range.low, range.high, wanted)
  const step = major.length > 1 ? (major[1] as number) - (major[0] as number) : range.high - range.low
  const largest = Math.max(Math.abs(range.low), Math.abs(range.high))
  const order = largest > 0 ? Math.floor(Math.log10(largest)) : 0
  const factorExponent = order < -2 || order > 5 ? order : 0
  const scale = 10 ** factorExponent
  const decimals = Math.min(12, decimalsOf(step / scale))
  const labels = major.map((value) => withMinus((value / scale).toFixed(decimals)))
  const parts = /^[1]/.test((step / 10 ** Math.floor(Math.log10(step) + 1e-9)).toFixed(3)) ? 5 : 4
  const minor: number[] = []
  const fine = step / parts
  const first = Math.ceil(range.low / fine)
  const last = Math.floor(range.high / fine)
  const isRoomy = (length * fine) / (range.high - range.low) >= 4 && last - first < 500
  for (let k = first; isRoomy && k <= last; k++) {
    if (((k % parts) + parts) % parts !== 0) minor.push(k * fine)
  }
  return { major, minor, labels, factorExponent }
}

/** Ticks of a logarithmic axis; `range` and positions are decimal logarithms. */
export const logTicks = (range: Range, wanted: number): AxisTicks => {
  const first = Math.ceil(range.low - 1e-9)
  const last = Math.floor(range.high + 1e-9)
  // Less than one full decade in sight: the labels are plain values at even steps of the value.
  if (last - first < 1) {
    const values = niceTicks(10 ** range.low, 10 ** range.high, wanted).filter((value) => value > 0)
    return { major: values.map(Math.log10), minor: [], labels: values.map(formatPlain), factorExponent: 0 }
  }
  const stride = Math.max(1, Math.ceil((last - first + 1) / wanted))
  const major: number[] = []
  const minor: number[] = []
  for (let decade = Math.floor(range.low); decade <= last; decade++) {
    const isMajor = ((decade % stride) + stride) % stride === 0
    if (decade >= first) (isMajor ? major : minor).push(decade)
    if (stride > 1) continue
    for (let m = 2; m < 10; m++) {
      const position = decade + Math.log10(m)
      if (position > range.low && position < range.high) minor.push(position)
    }
  }
  return { major, minor, labels: major.map(powerOfTen), factorExponent: 0 }
}

/** `intensity (1/meV)` with a factor becomes `intensity (10⁻³/meV)`-like text: the power stands before the unit. */
export const labelWithFactor = (label: string, factorExponent: number): string => {
  if (factorExponent === 0) return label
  const power = powerOfTen(factorExponent)
  const match = /^(.*)\(([^()]*)\)\s*$/.exec(label)
  if (!match) return `${label} (${power})`
  const unit = match[2] ?? ''
  return `${match[1]}(${power}${unit.startsWith('1/') ? unit.slice(1) : ` ${unit}`})`
}
