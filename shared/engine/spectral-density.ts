/**
 * Spectral density of the continuous bath for display: hbar J in meV at energies in meV, the sum over all terms.
 * Zero at and below E = 0; discrete modes are delta functions and do not enter.
 * Definition of J: Mukamel (1995), ch. 8. Spec: tests/engine/bath-integrals.spec.ts.
 */
import type { BathTerm } from '../schemas/parameter-set'
import { toContinuum } from './bath/registry'
import { angularFrequencyOf, HBAR_MEV_PS } from './constants'

export const spectralDensity = (bath: readonly BathTerm[], energiesMeV: Float64Array): Float64Array => {
  const terms = bath.map(toContinuum)
  return energiesMeV.map((energy) => {
    if (!(energy > 0)) return 0
    const frequency = angularFrequencyOf(energy)
    return HBAR_MEV_PS * terms.reduce((sum, term) => sum + term.density(frequency), 0)
  })
}
