/**
 * Places of true values along a ruler, 0..1. Even to scale where the values allow it; where they crowd (1, 2, 5, 100)
 * the scale is compressed by an inverse hyperbolic sine, which keeps order and zero and separates the small ones.
 */
export const rulerPositions = (values: readonly number[]): number[] => {
  if (values.length === 0) return []
  if (values.length === 1) return [0.5]
  const low = Math.min(...values)
  const high = Math.max(...values)
  const span = high - low
  if (span === 0) return values.map((_, k) => k / (values.length - 1))
  const linear = values.map((value) => (value - low) / span)
  const gaps = linear.slice(1).map((at, k) => at - (linear[k] as number))
  const smallest = Math.min(...gaps)
  if (smallest >= 0.35 / (values.length - 1)) return linear
  const softening = Math.max(smallest * span, 1e-12)
  const top = Math.asinh(span / softening)
  return values.map((value) => Math.asinh((value - low) / softening) / top)
}

/** Index of the value nearest to a place. */
export const nearestIndex = (positions: readonly number[], at: number): number => {
  let best = 0
  positions.forEach((position, k) => {
    if (Math.abs(position - at) < Math.abs((positions[best] as number) - at)) best = k
  })
  return best
}

/** Indices whose labels fit beside one another: the current one first, then the ends, then the rest from the left. */
export const rulerLabels = (
  positions: readonly number[],
  texts: readonly string[],
  width: number,
  current: number,
): number[] => {
  const kept: number[] = []
  const half = (k: number) => (texts[k]?.length ?? 0) * 3.6 + 5
  const fits = (k: number) =>
    kept.every((other) => {
      const distance = Math.abs((positions[k] as number) - (positions[other] as number)) * width
      return distance >= half(k) + half(other)
    })
  const order = [current, 0, positions.length - 1, ...positions.keys()]
  for (const k of order) {
    if (k >= 0 && k < positions.length && !kept.includes(k) && fits(k)) kept.push(k)
  }
  return kept.sort((a, b) => a - b)
}
