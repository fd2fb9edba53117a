import fc from 'fast-check'
import { quantities } from '../../shared/schemas/quantities'
import { cutoffShapes, type BathTerm } from '../../shared/schemas/parameter-set'

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

const relative = { min: 1e-3, max: 1.999 }

/** One term of any kind, over the whole range of its schema. */
export const arbitraryBathTerm: fc.Arbitrary<BathTerm> = fc.oneof(
  arbitraryPowerLaw,
  fc.record({
    kind: fc.constant('overdamped' as const),
    reorganizationEnergyMeV: positive(quantities.reorganizationEnergyMeV),
    relaxationEnergyMeV: positive(quantities.relaxationEnergyMeV),
  }),
  fc
    .record({
      kind: fc.constant('underdamped' as const),
      huangRhys: positive(quantities.huangRhys),
      energyMeV: positive(quantities.modeEnergyMeV),
      damping: logUniform(relative.min, relative.max),
    })
    .map(({ damping, ...term }) => ({
      ...term,
      dampingEnergyMeV: Math.max(quantities.dampingEnergyMeV.min, damping * term.energyMeV),
    })),
  fc.record({
    kind: fc.constant('logNormal' as const),
    huangRhys: positive(quantities.huangRhys),
    energyMeV: positive(quantities.modeEnergyMeV),
    relativeWidth: logUniform(quantities.relativeWidth.min, quantities.relativeWidth.max),
  }),
  fc.record({
    kind: fc.constant('confinedExciton' as const),
    densityKgPerM3: positive(quantities.densityKgPerM3),
    longitudinalVelocityMPerS: positive(quantities.longitudinalVelocityMPerS),
    transverseVelocityMPerS: positive(quantities.transverseVelocityMPerS),
    electronShiftEV: fc.double({ min: -30, max: 30, noNaN: true }),
    holeShiftEV: fc.double({ min: -30, max: 30, noNaN: true }),
    electronLengthNm: positive(quantities.electronLengthNm),
    holeLengthNm: positive(quantities.holeLengthNm),
    piezoCoefficientCPerM2: fc.double({ min: -5, max: 5, noNaN: true }),
    relativePermittivity: positive(quantities.relativePermittivity),
  }),
  fc
    .array(fc.record({ gap: logUniform(1e-3, 20), density: fc.double({ min: 0, max: 50, noNaN: true }) }), {
      minLength: 2,
      maxLength: 20,
    })
    .chain((points) =>
      arbitraryExponent.map((lowEnergyExponent) => ({
        kind: 'tabulated' as const,
        energiesMeV: points.map((_, index) => points.slice(0, index + 1).reduce((sum, { gap }) => sum + gap, 0)),
        densityMeV: points.map(({ density }) => density),
        lowEnergyExponent,
      })),
    ),
  fc.record({
    kind: fc.constant('expression' as const),
    formula: fc.constantFrom(
      'E^3*exp(-E/2)',
      '0.3*sqrt(E)*exp(-(E/4)^2)',
      '2*3*E*0.7/(E^2+0.49)',
      'E^2*exp(-(E-8)^2/0.5)/50',
      '0.1*E*exp(-E)*(1+sin(E)^2)',
    ),
  }),
)
