/** Indices of at most `limit` points that keep the look of a curve: lowest and highest of each stretch, ends included. */
export const thin = (values: Float64Array, limit: number): number[] => {
  const size = values.length
  if (size <= limit) return Array.from({ length: size }, (_, index) => index)
  const stretches = Math.floor((limit - 2) / 2)
  const indices = new Set([0])
  for (let stretch = 0; stretch < stretches; stretch += 1) {
    const start = 1 + Math.floor((stretch * (size - 2)) / stretches)
    const end = 1 + Math.floor(((stretch + 1) * (size - 2)) / stretches)
    let lowest = start
    let highest = start
    for (let index = start; index < end; index += 1) {
      if ((values[index] ?? 0) < (values[lowest] ?? 0)) lowest = index
      if ((values[index] ?? 0) > (values[highest] ?? 0)) highest = index
    }
    indices.add(Math.min(lowest, highest)).add(Math.max(lowest, highest))
  }
  return [...indices.add(size - 1)]
}
