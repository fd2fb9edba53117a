/**
 * Line weights of one displaced oscillator at a temperature.
 *
 *   P_m = exp(-S (2n + 1)) ((n + 1)/n)^{m/2} I_m(2 S sqrt(n (n + 1))),  line m at E0 + m hbar w in absorption
 *
 * written as exp(-S (sqrt(n+1) - sqrt(n))^2) (S (n+1))^m [e^{-z} I_m(z) / (z/2)^m], z = 2 S sqrt(n (n + 1)), which has no
 * cancelling exponentials and goes over into the Poisson weights e^{-S} S^m / m! at T = 0. For m < 0 (lines below E0)
 * the base is S n instead of S (n + 1).
 * Source: Huang & Rhys, Proc. R. Soc. A 204, 406 (1950). Accuracy 1e-13 (tests/engine/huang-rhys.spec.ts).
 */
import type { Mode } from '../schemas/parameter-set'
import { besselIScaled } from './bessel-i'
import { occupationOf } from './constants'

/** Lattice occupation as the two square roots that the weights are made of. */
const weightParts = ({ energyMeV, huangRhys }: Pick<Mode, 'energyMeV' | 'huangRhys'>, temperatureK: number) => {
  const n = occupationOf(energyMeV, temperatureK)
  // sqrt(n+1) - sqrt(n) without cancellation for a hot mode.
  const difference = 1 / (Math.sqrt(n + 1) + Math.sqrt(n))
  return { n, z: 2 * huangRhys * Math.sqrt(n * (n + 1)), prefactor: Math.exp(-huangRhys * difference * difference) }
}

/** Weights of the lines `orders` (integers; the sum over all integers is 1). */
export const huangRhysLineWeights = (
  mode: Pick<Mode, 'energyMeV' | 'huangRhys'>,
  temperatureK: number,
  orders: readonly number[],
): Float64Array => {
  const { n, z, prefactor } = weightParts(mode, temperatureK)
  const highest = orders.reduce((most, order) => Math.max(most, Math.abs(order)), 0)
  const scaled = z >= 1 ? besselIScaled(highest, z) : undefined
  return Float64Array.from(orders, (order) => {
    const m = Math.abs(order)
    if (scaled) {
      // ((n+1)/n)^{m/2} may overflow beside an underflowing I_m: their logarithms are added instead.
      const value = scaled[m]!
      return value > 0 ? prefactor * Math.exp((order / 2) * Math.log1p(1 / n) + Math.log(value)) : 0
    }
    const base = mode.huangRhys * (order >= 0 ? n + 1 : n)
    let reduced = 1
    for (let k = 1; k <= m; k++) reduced *= base / k
    return prefactor * Math.exp(-z) * reduced * reducedSeries(m, (z * z) / 4)
  })
}

/** m! I_m(z) / (z/2)^m = sum_k q^k m! / (k! (m + k)!), q = z^2/4 < 1/4: 1e-17 within ten terms. */
const reducedSeries = (m: number, q: number): number => {
  let term = 1
  let sum = 1
  for (let k = 1; k <= 12; k++) {
    term *= q / (k * (m + k))
    sum += term
  }
  return sum
}

/** Weight of the line at E0 itself, exp(-S(2n+1)) I_0(2 S sqrt(n(n+1))). */
export const modeZeroPhononWeight = (mode: Pick<Mode, 'energyMeV' | 'huangRhys'>, temperatureK: number): number =>
  huangRhysLineWeights(mode, temperatureK, [0])[0]!

/** exp(-S(2n+1)): the Debye-Waller factor of one mode. */
export const modeDebyeWallerFactor = (mode: Pick<Mode, 'energyMeV' | 'huangRhys'>, temperatureK: number): number =>
  Math.exp(-mode.huangRhys * (2 * occupationOf(mode.energyMeV, temperatureK) + 1))
