/**
 * Thins a curve to what a figure of so many pixel columns can show: per column the first, lowest, highest and last
 * point. Peaks keep their height, and a curve of a million points draws as fast as one of two thousand.
 */
export const decimate = (
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  low: number,
  high: number,
  columns: number,
): number[] => {
  const kept: number[] = []
  const n = Math.min(x.length, y.length)
  let start = 0
  let end = n
  // The neighbours just outside stay, so that a line runs to the frame.
  while (start + 1 < n && (x[start + 1] as number) < low) start++
  while (end - 2 >= 0 && (x[end - 2] as number) > high) end--
  if (end - start <= 4 * columns) {
    for (let i = start; i < end; i++) kept.push(i)
    return kept
  }
  const width = (high - low) / columns
  let i = start
  while (i < end) {
    const column = Math.floor(((x[i] as number) - low) / width)
    let lowest = i
    let highest = i
    let j = i
    while (j < end && Math.floor(((x[j] as number) - low) / width) === column) {
      if ((y[j] as number) < (y[lowest] as number)) lowest = j
      if ((y[j] as number) > (y[highest] as number)) highest = j
      j++
    }
    for (const index of [...new Set([i, lowest, highest, j - 1])].sort((a, b) => a - b)) kept.push(index)
    i = j
  }
  return kept
}
