/**
 * Temperature law of the homogeneous zero-phonon width (full width at half maximum).
 *
 *   Gamma(T) = Gamma_0 + a_ac T + b_LO / (exp(E_LO / k_B T) - 1)
 *
 * Source: Rudin, Reinecke & Segall, Phys. Rev. B 42, 11218 (1990). Values: tests/engine/linewidth.spec.ts.
 */
import type { ParameterSet } from '../schemas/parameter-set'
import { occupationOf } from './constants'

type Widths = Pick<
  ParameterSet,
  'zeroPhononFwhmMeV' | 'acousticBroadeningMeVPerK' | 'opticalBroadeningMeV' | 'opticalPhononEnergyMeV'
>

/** Gamma(T) in meV. The optical term is left out when no optical-phonon energy is given. */
export const zeroPhononFwhmAt = (set: Widths, temperatureK: number): number => {
  const optical =
    set.opticalPhononEnergyMeV === undefined
      ? 0
      : set.opticalBroadeningMeV * occupationOf(set.opticalPhononEnergyMeV, temperatureK)
  return set.zeroPhononFwhmMeV + set.acousticBroadeningMeVPerK * temperatureK + optical
}
