/**
 * Logarithm of the gamma function for positive real argument, and Gamma itself.
 *
 *   ln Gamma(x) = (x - 1/2) ln x - x + ln(2 pi)/2 + sum_j B_2j / (2j (2j-1) x^(2j-1))
 *
 * Stirling's series from x = 12 on (eight terms: 1e-17), reached by Gamma(x + 1) = x Gamma(x).
 * Source: Abramowitz & Stegun (1964), 6.1.15 and 6.1.40. Accuracy: 2e-15 (tests/engine/special-functions.spec.ts).
 */
const STIRLING = [1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360, 1 / 156, -3617 / 122400] as const

const stirlingSeries = (x: number): number => {
  const inverse = 1 / (x * x)
  let sum = 0
  for (let j = STIRLING.length - 1; j >= 0; j--) sum = sum * inverse + STIRLING[j]!
  return sum / x
}

export const logGamma = (x: number): number => {
  let shifted = x
  let product = 1
  while (shifted < 12) {
    product *= shifted
    shifted++
  }
  return (
    (shifted - 0.5) * Math.log(shifted) -
    shifted +
    0.5 * Math.log(2 * Math.PI) +
    stirlingSeries(shifted) -
    Math.log(product)
  )
}

/** Gamma(x) for 0 < x < 170; exact factorials at the integers. */
export const gamma = (x: number): number => {
  if (Number.isInteger(x) && x < 23) {
    let factorial = 1
    for (let k = 2; k < x; k++) factorial *= k
    return factorial
  }
  let shifted = x
  let product = 1
  while (shifted < 12) {
    product *= shifted
    shifted++
  }
  const power = Math.pow(shifted, shifted / 2 - 0.25)
  return (power * Math.exp(-shifted) * power * Math.sqrt(2 * Math.PI) * Math.exp(stirlingSeries(shifted))) / product
}
