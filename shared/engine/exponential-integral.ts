/**
 * Exponential integrals of real positive argument, scaled so that nothing overflows: e^y E_1(y) and e^{-y} Ei(y).
 *
 *   E_1(y) = Int_y^inf e^{-u}/u du = -gamma - ln y - sum_(k>=1) (-y)^k/(k k!)        (series, y <= 1.5)
 *   e^y E_1(y) = 1/(y + 1 - 1/(y + 3 - 4/(y + 5 - ...)))                             (continued fraction, y > 1.5)
 *   Ei(y) = gamma + ln y + sum_(k>=1) y^k/(k k!)                                     (series, y <= 40)
 *   e^{-y} Ei(y) ~ (1/y) sum_k k!/y^k                                                (asymptotic, y > 40)
 *
 * Source: Abramowitz & Stegun (1964), 5.1.10, 5.1.11, 5.1.22 and 5.1.51. Accuracy 3e-15 (tests/engine/special-functions.spec.ts).
 */
export const EULER_GAMMA = 0.5772156649015329

/** sum_(k>=1) y^k / (k k!), any sign of y. */
export const exponentialSeries = (y: number): number => {
  let power = 1
  let sum = 0
  for (let k = 1; k < 200; k++) {
    power *= y / k
    const term = power / k
    sum += term
    if (Math.abs(term) < 1e-17 * Math.abs(sum)) break
  }
  return sum
}

export const scaledE1 = (y: number): number => {
  if (y <= 1.5) return -Math.exp(y) * (EULER_GAMMA + Math.log(y) + exponentialSeries(-y))
  // Modified Lentz evaluation of the contracted fraction.
  let b = y + 1
  let c = 1e300
  let d = 1 / b
  let value = d
  for (let k = 1; k < 300; k++) {
    const a = -k * k
    b += 2
    d = 1 / (a * d + b)
    c = b + a / c
    const factor = c * d
    value *= factor
    if (Math.abs(factor - 1) < 2e-16) break
  }
  return value
}

export const scaledEi = (y: number): number => {
  if (y <= 40) return Math.exp(-y) * (EULER_GAMMA + Math.log(y) + exponentialSeries(y))
  let term = 1
  let sum = 1
  for (let k = 1; k < 60; k++) {
    const next = (term * k) / y
    if (next > term || next < 1e-17) break
    term = next
    sum += term
  }
  return sum / y
}
