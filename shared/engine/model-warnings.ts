/**
 * Sentences about a parameter set that is valid but says the same thing twice, or claims a width that its lifetime does
 * not allow. Each names the fields and the numbers.
 * Derived from gam >= 1/(2 T_1) and from the slope of Re g0 at long times (`bath-integrals.ts`). Spec: tests/engine/linewidth.spec.ts.
 */
import type { ParameterSet } from '../schemas/parameter-set'
import { toContinuum } from './bath/registry'
import { BOLTZMANN_MEV_PER_K, HBAR_MEV_PS } from './constants'
import { zeroPhononFwhmAt } from './linewidth'

const inWords = (value: number): string => Number(value.toPrecision(4)).toString()

/** The lifetime limit of a homogeneous width is hbar / T_1, because gam >= 1/(2 T_1). */
const lifetimeWarning = (set: ParameterSet): string[] => {
  if (set.populationLifetimePs === undefined) return []
  const limit = HBAR_MEV_PS / set.populationLifetimePs
  const temperature = set.temperaturesK.find((value) => zeroPhononFwhmAt(set, value) < limit)
  if (temperature === undefined) return []
  return [
    `zeroPhononFwhmMeV: the zero-phonon width is ${inWords(zeroPhononFwhmAt(set, temperature))} meV at ${temperature} K, below the ` +
      `${inWords(limit)} meV that a population lifetime of ${inWords(set.populationLifetimePs)} ps gives by itself (hbar/T1); ` +
      'the width is used as given.',
  ]
}

/** Every term linear in w at low energy adds a Lorentzian-like width 2 k_B T J'(0); beside a_ac it is counted twice. */
const acousticWarnings = (set: ParameterSet): string[] => {
  if (!(set.acousticBroadeningMeVPerK > 0)) return []
  return set.bath.flatMap((term, index) => {
    const { exponent, coefficient } = toContinuum(term).low
    if (exponent > 1 || !(coefficient > 0)) return []
    const perKelvin = 2 * BOLTZMANN_MEV_PER_K * coefficient
    const width = exponent === 1 ? ` (${inWords(perKelvin)} meV/K)` : ''
    return [
      `bath.${index}: this term already broadens the zero-phonon line with temperature${width}; ` +
        `acousticBroadeningMeVPerK = ${inWords(set.acousticBroadeningMeVPerK)} adds to it, so the same broadening may be counted twice.`,
    ]
  })
}

/** A damped vibration broadens the line by itself; beside b_LO at the same energy the phonon is counted twice. */
const opticalWarnings = (set: ParameterSet): string[] => {
  const energy = set.opticalPhononEnergyMeV
  if (!(set.opticalBroadeningMeV > 0) || energy === undefined) return []
  return set.bath.flatMap((term, index) =>
    term.kind === 'underdamped' && term.huangRhys > 0 && Math.abs(term.energyMeV - energy) <= term.dampingEnergyMeV
      ? [
          `bath.${index}: this damped vibration at ${inWords(term.energyMeV)} meV already broadens the line; opticalBroadeningMeV = ` +
            `${inWords(set.opticalBroadeningMeV)} with opticalPhononEnergyMeV = ${inWords(energy)} may count the same phonon twice.`,
        ]
      : [],
  )
}

export const modelWarnings = (set: ParameterSet): string[] => [
  ...lifetimeWarning(set),
  ...acousticWarnings(set),
  ...opticalWarnings(set),
]
