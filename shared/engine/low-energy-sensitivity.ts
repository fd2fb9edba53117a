/**
 * How much a result rests on the power of E with which a tabulated spectral density was continued towards E = 0, where a
 * measured or computed table says nothing: the zero-phonon weight with that exponent p, with p - 1 and with p + 1.
 *
 * Source: the definition of the weight in `bath-integrals.ts`. Spec: tests/engine/tabulated-bath.spec.ts.
 */
import { zeroPhononWeight } from './bath-integrals'
import type { Phonons } from './types'

export interface LowEnergySensitivity {
  /** Index of the tabulated term. */
  termIndex: number
  lowEnergyExponent: number
  /** Zero-phonon weight as it stands; null where it does not exist. */
  weight: number | null
  /** With the exponent lowered by one; null where the weight does not exist, or p - 1 is not above 0. */
  weightWithLowerExponent: number | null
  weightWithHigherExponent: number | null
}

export const lowEnergySensitivity = (phonons: Phonons, temperatureK: number): LowEnergySensitivity[] =>
  phonons.bath.flatMap((term, termIndex) => {
    if (term.kind !== 'tabulated') return []
    const weightWith = (lowEnergyExponent: number): number | null => {
      if (!(lowEnergyExponent > 0)) return null
      const bath = phonons.bath.map((other, index) => (index === termIndex ? { ...term, lowEnergyExponent } : other))
      return zeroPhononWeight({ ...phonons, bath }, temperatureK).weight
    }
    const { lowEnergyExponent } = term
    return [
      {
        termIndex,
        lowEnergyExponent,
        weight: weightWith(lowEnergyExponent),
        weightWithLowerExponent: weightWith(lowEnergyExponent - 1),
        weightWithHigherExponent: weightWith(lowEnergyExponent + 1),
      },
    ]
  })
