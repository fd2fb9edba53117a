/**
 * Monotone piecewise cubic interpolation: no overshoot between points, so a table of non-negative values stays so.
 *
 * Slopes by the weighted harmonic mean of the neighbouring secants (0 at an extremum), at the ends by the three-point
 * formula limited to keep the shape. Source: Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5, 300 (1984); ends as in Moler,
 * Numerical Computing with MATLAB (2004), sec. 3.6. Equal to scipy's PchipInterpolator (tests/engine/tabulated-bath.spec.ts).
 */

const endSlope = (h0: number, h1: number, d0: number, d1: number): number => {
  const slope = ((2 * h0 + h1) * d0 - h0 * d1) / (h0 + h1)
  if (Math.sign(slope) !== Math.sign(d0)) return 0
  return Math.sign(d0) !== Math.sign(d1) && Math.abs(slope) > 3 * Math.abs(d0) ? 3 * d0 : slope
}

const slopesOf = (x: Float64Array, y: Float64Array): Float64Array => {
  const last = x.length - 1
  const widths = Float64Array.from({ length: last }, (_, i) => x[i + 1]! - x[i]!)
  const secants = Float64Array.from({ length: last }, (_, i) => (y[i + 1]! - y[i]!) / widths[i]!)
  const slopes = new Float64Array(last + 1)
  if (last === 1) return slopes.fill(secants[0]!)
  slopes[0] = endSlope(widths[0]!, widths[1]!, secants[0]!, secants[1]!)
  slopes[last] = endSlope(widths[last - 1]!, widths[last - 2]!, secants[last - 1]!, secants[last - 2]!)
  for (let i = 1; i < last; i++) {
    const [before, after] = [secants[i - 1]!, secants[i]!]
    if (before * after <= 0) continue
    const w1 = 2 * widths[i]! + widths[i - 1]!
    const w2 = widths[i]! + 2 * widths[i - 1]!
    slopes[i] = (w1 + w2) / (w1 / before + w2 / after)
  }
  return slopes
}

/** The interpolant of at least two points, ascending in x; call it inside the table only. */
export const monotoneCubic = (x: Float64Array, y: Float64Array): ((at: number) => number) => {
  const slopes = slopesOf(x, y)
  // Quadrature walks the table upward: the next value is nearly always in the same interval or the next one.
  let interval = 0
  return (at) => {
    if (!(at >= x[interval]!) || at > x[interval + 1]!) interval = findInterval(x, at)
    const h = x[interval + 1]! - x[interval]!
    const t = (at - x[interval]!) / h
    const u = 1 - t
    const [y0, y1] = [y[interval]!, y[interval + 1]!]
    const [m0, m1] = [slopes[interval]! * h, slopes[interval + 1]! * h]
    return u * u * (y0 * (1 + 2 * t) + m0 * t) + t * t * (y1 * (1 + 2 * u) - m1 * u)
  }
}

const findInterval = (x: Float64Array, at: number): number => {
  let low = 0
  let high = x.length - 2
  while (low < high) {
    const middle = (low + high + 1) >> 1
    if (x[middle]! <= at) low = middle
    else high = middle - 1
  }
  return low
}
