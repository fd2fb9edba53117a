import fc from 'fast-check'
import { quantities } from '../../shared/schemas/quantities'
import { cutoffShapes } from '../../shared/schemas/parameter-set'

/** Numbers spread evenly over the decades from low to high. */
export const logUniform = (low: number, high: number): fc.Arbitrary<number> =>
  fc
    .double({ min: Math.log(low), max: Math.log(high), noNaN: true })
    .map((value) => Math.min(high, Math.max(low, Math.exp(value))))

const positive = ({ min, max }: { min: number; max: number }) => logUniform(Math.max(min, 1e-4), max)

/** Exponents of the whole range, with the named ones often. */
const arbitraryExponent = fc.oneof(fc.constantFrom(1, 2, 3), fc.double({ min: 1e-3, max: 6, noNaN: true }))

export const arbitraryPowerLaw = fc.record({
  kind: fc.constant('powerLaw' as const),
  couplingStrength: positive(quantities.couplingStrength),
  exponent: arbitraryExponent,
  cutoffEnergyMeV: positive(quantities.cutoffEnergyMeV),
  cutoffShape: fc.constantFrom(...cutoffShapes),
})

export const arbitraryMode = fc.record({
  label: fc.constant(''),
  energyMeV: positive(quantities.modeEnergyMeV),
  huangRhys: positive(quantities.huangRhys),
})

export const arbitraryPhonons = fc.record({
  bath: fc.array(arbitraryPowerLaw, { maxLength: 3 }),
  modes: fc.array(arbitraryMode, { maxLength: 3 }),
})

export const arbitraryTemperature = fc.oneof(
  fc.constant(0),
  logUniform(1e-6, 1),
  fc.double({ min: 0, max: quantities.temperatureK.max, noNaN: true }),
)
