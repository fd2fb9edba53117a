/**
 * Modified Bessel functions of the first kind, integer order, exponentially scaled: e^{-z} I_m(z) for m = 0..maxOrder.
 *
 * Miller's downward recurrence I_(k-1)(z) = (2k/z) I_k(z) + I_(k+1)(z), normalised by e^z = I_0 + 2 sum_k I_k, which has
 * positive terms only and so loses nothing. Start order m + 9 sqrt(z) + 30: there I_k / I_0 < 1e-17.
 * Source: Abramowitz & Stegun (1964), 9.6.26 and 9.6.34. Relative accuracy 2e-15 (tests/engine/special-functions.spec.ts).
 */
export const besselIScaled = (maxOrder: number, z: number): Float64Array => {
  const out = new Float64Array(maxOrder + 1)
  if (z === 0) {
    out[0] = 1
    return out
  }
  if (z < 1e-3) {
    // Three terms of the power series: the fourth is below 1e-22.
    const quarter = (z * z) / 4
    let leading = Math.exp(-z)
    for (let m = 0; m <= maxOrder; m++) {
      out[m] = leading * (1 + (quarter / (m + 1)) * (1 + quarter / (2 * (m + 2))))
      leading *= z / 2 / (m + 1)
    }
    return out
  }
  const start = maxOrder + Math.ceil(9 * Math.sqrt(z)) + 30
  let above = 0
  let value = 1e-280
  let sum = 0
  for (let k = start; k > 0; k--) {
    sum += 2 * value
    const below = ((2 * k) / z) * value + above
    above = value
    value = below
    if (k - 1 <= maxOrder) out[k - 1] = value
    if (value > 1e200) {
      value *= 1e-200
      above *= 1e-200
      sum *= 1e-200
      for (let m = Math.max(k - 1, 0); m <= maxOrder; m++) out[m]! *= 1e-200
    }
  }
  sum += value
  for (let m = 0; m <= maxOrder; m++) out[m]! /= sum
  return out
}
