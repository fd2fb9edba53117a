import type { ParameterSet, PowerLawTerm } from '../../shared/schemas/parameter-set'

/** A power-law term, Gaussian p = 3 unless said otherwise. */
export const powerLaw = (changes: Partial<PowerLawTerm> = {}): PowerLawTerm => ({
  kind: 'powerLaw',
  couplingStrength: 0.5,
  exponent: 3,
  cutoffEnergyMeV: 2,
  cutoffShape: 'gaussian',
  ...changes,
})

export const parameterSet = (changes: Partial<ParameterSet> = {}): ParameterSet => ({
  zeroPhononEnergyMeV: 2000,
  bath: [],
  modes: [],
  zeroPhononFwhmMeV: 0,
  acousticBroadeningMeVPerK: 0,
  opticalBroadeningMeV: 0,
  ensembleFwhmMeV: 0,
  temperaturesK: [4],
  waitingTimesPs: [0],
  ...changes,
})

/** |found - expected| relative to max(floor, |expected|); NaN where either is not a number, so that it fails a bound. */
export const relativeError = (found: number, expected: number, floor = 0): number =>
  found === expected ? 0 : Math.abs(found - expected) / Math.max(floor, Math.abs(expected))

/** Largest of values and 0, NaN when one is NaN. */
export const largest = (values: Iterable<number>): number => {
  let most = 0
  for (const value of values) if (!(value <= most)) most = value
  return most
}
