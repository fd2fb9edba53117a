/**
 * Monotone cubic interpolation: between two points the curve never leaves their range.
 *
 * Source: Fritsch & Carlson, SIAM J. Numer. Anal. 17, 238 (1980), with the harmonic-mean slopes of Fritsch & Butland, SIAM
 * J. Sci. Stat. Comput. 5, 300 (1984). Third order where the data are monotone, second at an extremum.
 */

/** Function of x inside the table; NaN outside. Expects at least two points, strictly ascending. */
export const interpolateMonotone = (x: Float64Array, y: Float64Array): ((at: number) => number) => {
  const n = x.length
  const slopes = new Float64Array(n)
  const secant = (i: number) => (y[i + 1]! - y[i]!) / (x[i + 1]! - x[i]!)
  for (let i = 1; i < n - 1; i++) {
    const before = secant(i - 1)
    const after = secant(i)
    if (before * after <= 0) continue
    const left = x[i]! - x[i - 1]!
    const right = x[i + 1]! - x[i]!
    const a = 2 * right + left
    const b = right + 2 * left
    slopes[i] = (a + b) / (a / before + b / after)
  }
  slopes[0] = secant(0)
  slopes[n - 1] = secant(n - 2)
  return (at) => {
    if (!(at >= x[0]! && at <= x[n - 1]!)) return NaN
    let low = 0
    let high = n - 1
    while (high - low > 1) {
      const middle = (low + high) >> 1
      if (x[middle]! <= at) low = middle
      else high = middle
    }
    const width = x[high]! - x[low]!
    const t = (at - x[low]!) / width
    const u = 1 - t
    return (
      y[low]! * u * u * (1 + 2 * t) +
      y[high]! * t * t * (1 + 2 * u) +
      width * t * u * (slopes[low]! * u - slopes[high]! * t)
    )
  }
}
