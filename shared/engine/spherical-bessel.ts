/**
 * Spherical Bessel functions j_0 .. j_(count-1) of one real argument x >= 0, written to `out`.
 *
 *   j_(n+1)(x) = (2n + 1)/x j_n(x) - j_(n-1)(x)
 *
 * Upward where that is stable (x above the highest order), else Miller's downward recurrence, normalised by the larger
 * of j_0 and j_1; below x = 1e-3 the first term of the power series x^n / (2n + 1)!! with its correction.
 * Source: Abramowitz & Stegun (1964), 10.1.2, 10.1.19 and 10.5. Relative to max |j_n|: 1e-15 (tests/engine/special-functions.spec.ts).
 */
export const sphericalBessel = (x: number, count: number, out: Float64Array): void => {
  if (x < 1e-3) {
    let leading = 1
    const half = (x * x) / 2
    for (let n = 0; n < count; n++) {
      // Two terms: the third is below x^4 / 8 < 2e-13 only relative to j_0, so it is kept for the lowest orders.
      out[n] = leading * (1 - (half / (2 * n + 3)) * (1 - half / (2 * (2 * n + 5))))
      leading *= x / (2 * n + 3)
    }
    return
  }
  const j0 = Math.sin(x) / x
  const j1 = (j0 - Math.cos(x)) / x
  if (x > count) {
    out[0] = j0
    if (count > 1) out[1] = j1
    for (let n = 1; n + 1 < count; n++) out[n + 1] = ((2 * n + 1) / x) * out[n]! - out[n - 1]!
    return
  }
  // The start order makes the minimal solution dominate by more than 1e17 at order count - 1.
  const start = count + 12 + Math.ceil(1.2 * x)
  let above = 0
  let value = 1e-280
  const scale = 1 / x
  for (let n = start; n > 0; n--) {
    const below = (2 * n + 1) * scale * value - above
    above = value
    value = below
    if (n - 1 < count) out[n - 1] = below
    if (Math.abs(value) > 1e200) {
      value *= 1e-200
      above *= 1e-200
      for (let m = Math.max(n - 1, 0); m < count; m++) out[m]! *= 1e-200
    }
  }
  // j_1 by the closed form loses digits below x = 0.1, and j_0 has no root there: normalise by j_0 first.
  const factor = x < 1 || Math.abs(j0) > Math.abs(j1) ? j0 / out[0]! : j1 / out[1]!
  for (let n = 0; n < count; n++) out[n]! *= factor
}
