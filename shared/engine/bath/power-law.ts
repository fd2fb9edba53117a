/**
 * Power-law bath with a Gaussian or exponential cutoff.
 *
 *   J(w) = pi a w^p w_c^(1-p) exp(-(w/w_c)^q),  w > 0,  q = 2 (Gaussian) or 1 (exponential)
 *
 * | symbol | variable | unit |
 * | a | couplingStrength | 1 |
 * | p | exponent, in (0, 6] | 1 |
 * | hbar w_c | cutoffEnergyMeV | meV |
 *
 * p = 3 is the deformation-potential form, p = 1 the piezoelectric form of an uncompensated charge.
 * Source: Leggett et al., Rev. Mod. Phys. 59, 1 (1987); Krummheuer, Axt & Kuhn, Phys. Rev. B 65, 195313 (2002).
 */
import type { PowerLawTerm } from '../../schemas/parameter-set'
import { angularFrequencyOf } from '../constants'
import type { ClosedForm, Continuum } from './continuum'
import { exponentialPowerLaw } from './power-law-exponential'

/** The cutoff factor is below 1e-18 of its value at w_c beyond these multiples of w_c, for every exponent up to 6. */
const REACH = { gaussian: 6.7, exponential: 56 } as const

export const powerLawContinuum = (term: PowerLawTerm): Continuum => {
  const { couplingStrength, exponent } = term
  const cutoff = angularFrequencyOf(term.cutoffEnergyMeV)
  const gaussian = term.cutoffShape === 'gaussian'
  const scale = Math.PI * couplingStrength * cutoff
  return {
    silent: couplingStrength === 0,
    density: (frequency) => {
      const x = frequency / cutoff
      return scale * Math.pow(x, exponent) * Math.exp(gaussian ? -x * x : -x)
    },
    low: { exponent, coefficient: scale * Math.pow(cutoff, -exponent) },
    // The exponential departs from 1 linearly: the pure power must start far lower to hold to rounding.
    lowScale: gaussian ? cutoff : 1e-7 * cutoff,
    upper: cutoff * REACH[term.cutoffShape],
    reach: cutoff * REACH[term.cutoffShape],
    panelWidth: () => (gaussian ? 1.7 : 7) * cutoff,
    firstTime: (gaussian ? 1.5 : 0.35) / cutoff,
  }
}

export const powerLawClosedForm = (term: PowerLawTerm, th: number): ClosedForm | undefined => {
  if (term.cutoffShape !== 'exponential') return undefined
  const { couplingStrength, exponent, cutoffEnergyMeV } = term
  return { addAt: exponentialPowerLaw(couplingStrength, exponent, angularFrequencyOf(cutoffEnergyMeV), th), from: 0 }
}
