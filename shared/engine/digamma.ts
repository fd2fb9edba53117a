/**
 * psi(1 + x) - psi(1) for real x >= 0, exact to rounding also for small x, where it is zeta(2) x.
 *
 *   psi(1 + x) - psi(1) = sum_(k>=1) x / (k (k + x))
 *
 * Eleven terms directly, the rest by the asymptotic series of psi at 12 + x and at 12, joined so that nothing cancels.
 * Source: Abramowitz & Stegun (1964), 6.3.16 and 6.3.18. Accuracy: 3e-16 relative (tests/engine/damped-bath.spec.ts).
 */
const BERNOULLI = [1 / 12, -1 / 120, 1 / 252, -1 / 240, 1 / 132, -691 / 32760, 1 / 12] as const

const START = 12

export const digammaExcess = (x: number): number => {
  let sum = 0
  for (let k = 1; k < START; k++) sum += x / (k * (k + x))
  const far = START + x
  // ln(far/start) and the differences of 1/(2 far), B_2j / (2j far^2j) in product form.
  let tail = Math.log1p(x / START) + x / (2 * START * far)
  const ratio = START / far
  let power = 1 / (START * START)
  let growth = 1
  for (const b of BERNOULLI) {
    growth *= ratio * ratio
    tail += b * power * (1 - growth)
    power /= START * START
  }
  return sum + tail
}
