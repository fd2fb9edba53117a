/**
 * Special functions of a complex argument, Re z > 0, in the plain form of the handbooks (on complex.js). They make the
 * textbook closed forms of g0 readable and are the oracle of the engine's own fast forms; no hot path uses them.
 *
 *   logGamma(z), digamma(z), trigamma(z), hurwitzZeta(s, z) = sum_(k>=0) (k + z)^-s continued to real s != 1
 *
 * Asymptotic series from |z| = 15 on, reached by the recurrence in z; the zeta function by Euler and Maclaurin.
 * Source: Abramowitz & Stegun (1964), 6.1.40, 6.3.18, 6.4.12; NIST Handbook (2010), 25.11.5 and 2.10.1.
 * Accuracy: 2e-14 relative to max(1, |f|) (tests/engine/special-functions.spec.ts).
 */
import Complex from 'complex.js'

export { Complex }
export type ComplexNumber = InstanceType<typeof Complex>

/** Bernoulli numbers B_2, B_4, ... */
const BERNOULLI = [1 / 6, -1 / 30, 1 / 42, -1 / 30, 5 / 66, -691 / 2730, 7 / 6, -3617 / 510, 43867 / 798, -174611 / 330]

const FAR = 15

/** Moves z to the right until the asymptotic series holds, giving every skipped argument to `each`. */
const shiftRight = (z: ComplexNumber, each: (skipped: ComplexNumber) => void): ComplexNumber => {
  let moved = z
  while (moved.abs() < FAR) {
    each(moved)
    moved = moved.add(1)
  }
  return moved
}

/** Principal branch, continuous on Re z > 0 and real on the real axis. */
export const logGamma = (z: ComplexNumber): ComplexNumber => {
  let skipped = new Complex(0, 0)
  const w = shiftRight(z, (argument) => (skipped = skipped.add(argument.log())))
  const square = w.mul(w)
  let power = w
  let sum = w
    .sub(0.5)
    .mul(w.log())
    .sub(w)
    .add(Math.log(2 * Math.PI) / 2)
  for (const [index, b] of BERNOULLI.entries()) {
    const n = 2 * (index + 1)
    sum = sum.add(new Complex(b / (n * (n - 1)), 0).div(power))
    power = power.mul(square)
  }
  return sum.sub(skipped)
}

export const digamma = (z: ComplexNumber): ComplexNumber => {
  let skipped = new Complex(0, 0)
  const w = shiftRight(z, (argument) => (skipped = skipped.add(argument.inverse())))
  const square = w.mul(w)
  let power = square
  let sum = w.log().sub(w.mul(2).inverse())
  for (const [index, b] of BERNOULLI.entries()) {
    sum = sum.sub(new Complex(b / (2 * (index + 1)), 0).div(power))
    power = power.mul(square)
  }
  return sum.sub(skipped)
}

export const trigamma = (z: ComplexNumber): ComplexNumber => {
  let skipped = new Complex(0, 0)
  const w = shiftRight(z, (argument) => (skipped = skipped.add(argument.mul(argument).inverse())))
  const square = w.mul(w)
  let power = w.mul(square)
  let sum = w.inverse().add(square.mul(2).inverse())
  for (const b of BERNOULLI) {
    sum = sum.add(new Complex(b, 0).div(power))
    power = power.mul(square)
  }
  return sum.add(skipped)
}

export const hurwitzZeta = (s: number, z: ComplexNumber): ComplexNumber => {
  let skipped = new Complex(0, 0)
  const w = shiftRight(z, (argument) => (skipped = skipped.add(argument.pow(new Complex(-s, 0)))))
  const leading = w.pow(new Complex(-s, 0))
  const square = w.mul(w)
  let sum = skipped.add(leading.mul(w).div(s - 1)).add(leading.div(2))
  let term = leading.div(w).mul(s / 2)
  for (const [index, b] of BERNOULLI.entries()) {
    const n = 2 * (index + 1)
    sum = sum.add(term.mul(b))
    term = term.mul(((s + n - 1) * (s + n)) / ((n + 1) * (n + 2))).div(square)
  }
  return sum
}
