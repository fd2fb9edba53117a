import type { Range } from '#shared/figure/ticks'

interface Curve {
  x: Float64Array
  y: Float64Array
}

/** The stretch of the axis in which any curve stays above a fraction of its own maximum, with a margin on both sides. */
export const signalRange = (curves: readonly Curve[], fraction: number, margin = 0.08): Range | undefined => {
  let low = Infinity
  let high = -Infinity
  for (const { x, y } of curves) {
    let top = 0
    for (const value of y) top = Math.max(top, Math.abs(value))
    const floor = top * fraction
    const first = y.findIndex((value) => Math.abs(value) > floor)
    const last = y.findLastIndex((value) => Math.abs(value) > floor)
    if (first < 0) continue
    low = Math.min(low, x[first] ?? low)
    high = Math.max(high, x[last] ?? high)
  }
  if (!(low < high)) return undefined
  const room = (high - low) * margin
  return { low: low - room, high: high + room }
}

/** A range cut to where the curves have points at all. */
export const clampRange = (range: Range | undefined, curves: readonly Curve[]): Range | undefined => {
  if (!range) return undefined
  const low = Math.min(...curves.map(({ x }) => x[0] ?? Infinity))
  const high = Math.max(...curves.map(({ x }) => x[x.length - 1] ?? -Infinity))
  return { low: Math.max(range.low, low), high: Math.min(range.high, high) }
}
