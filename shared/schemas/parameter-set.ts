import { z } from 'zod'
import { readFormula } from '../engine/bath/expression'
import { formulaLanguage } from '../engine/bath/formula'
import { limits } from '../utils/limits'
import { quantities } from './quantities'
import { quantitySchema } from './quantity'

const q = quantitySchema

const uniqueAscending = (what: string) => (values: number[], context: z.core.$RefinementCtx<number[]>) => {
  values.forEach((value, index) => {
    const before = values[index - 1]
    if (before !== undefined && !(value > before)) {
      context.addIssue({
        code: 'custom',
        path: [index],
        message: `expected ${what} in ascending order without repeats; found ${value} after ${before}`,
        input: value,
      })
    }
  })
}

export const cutoffShapes = ['gaussian', 'exponential'] as const

/** J(w) = pi a w^p w_c^(1-p) exp(-(w/w_c)^q), q = 2 for the Gaussian and 1 for the exponential cutoff. */
export const PowerLawTermSchema = z.strictObject({
  kind: z.literal('powerLaw'),
  couplingStrength: q(quantities.couplingStrength),
  exponent: q(quantities.exponent),
  cutoffEnergyMeV: q(quantities.cutoffEnergyMeV),
  cutoffShape: z.enum(cutoffShapes, { error: 'expected the cutoff shape "gaussian" or "exponential"' }),
})

/** J(w) = 2 lambda w G / (w^2 + G^2) (Drude-Lorentz). */
export const OverdampedTermSchema = z.strictObject({
  kind: z.literal('overdamped'),
  reorganizationEnergyMeV: q(quantities.reorganizationEnergyMeV),
  relaxationEnergyMeV: q(quantities.relaxationEnergyMeV),
})

/** J(w) = 2 S w_0^3 w G / ((w_0^2 - w^2)^2 + w^2 G^2) (underdamped Brownian oscillator). */
export const UnderdampedTermSchema = z
  .strictObject({
    kind: z.literal('underdamped'),
    huangRhys: q(quantities.huangRhys),
    energyMeV: q(quantities.modeEnergyMeV),
    dampingEnergyMeV: q(quantities.dampingEnergyMeV),
  })
  .superRefine(({ energyMeV, dampingEnergyMeV }, context) => {
    if (dampingEnergyMeV < 2 * energyMeV) return
    context.addIssue({
      code: 'custom',
      path: ['dampingEnergyMeV'],
      message: `expected a damping energy below twice the energy (${2 * energyMeV} meV), else the vibration is overdamped; found ${dampingEnergyMeV} meV`,
      input: dampingEnergyMeV,
    })
  })

/** J(w) = S w sqrt(pi/2)/s exp(-ln^2(w/w_0) / (2 s^2)): a log-normal sideband. */
export const LogNormalTermSchema = z.strictObject({
  kind: z.literal('logNormal'),
  huangRhys: q(quantities.huangRhys),
  energyMeV: q(quantities.modeEnergyMeV),
  relativeWidth: q(quantities.relativeWidth),
})

/** Bulk acoustic phonons coupled to a confined exciton by deformation potential and piezoelectric field. */
export const ConfinedExcitonTermSchema = z.strictObject({
  kind: z.literal('confinedExciton'),
  densityKgPerM3: q(quantities.densityKgPerM3),
  longitudinalVelocityMPerS: q(quantities.longitudinalVelocityMPerS),
  transverseVelocityMPerS: q(quantities.transverseVelocityMPerS),
  electronShiftEV: q(quantities.electronShiftEV),
  holeShiftEV: q(quantities.holeShiftEV),
  electronLengthNm: q(quantities.electronLengthNm),
  holeLengthNm: q(quantities.holeLengthNm),
  piezoCoefficientCPerM2: q(quantities.piezoCoefficientCPerM2).default(0),
  relativePermittivity: q(quantities.relativePermittivity),
})

/** hbar J as a table: monotone cubic inside, a power of E below the first point, 0 above the last. */
export const TabulatedTermSchema = z
  .strictObject({
    kind: z.literal('tabulated'),
    energiesMeV: z.array(q(quantities.phononEnergyMeV)).superRefine(uniqueAscending('phonon energies')),
    densityMeV: z.array(q(quantities.densityMeV)),
    lowEnergyExponent: q(quantities.lowEnergyExponent).default(3),
  })
  .superRefine(({ energiesMeV, densityMeV }, context) => {
    const refuse = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const positive = energiesMeV.filter((energy) => energy > 0).length
    if (positive < 2 || energiesMeV.length > limits.tablePoints) {
      refuse(['energiesMeV'], `expected 2 to ${limits.tablePoints} points above 0 meV; found ${positive}`, energiesMeV)
    }
    if (energiesMeV.length !== densityMeV.length) {
      refuse(
        ['densityMeV'],
        `expected one value for each of the ${energiesMeV.length} phonon energies; found ${densityMeV.length}`,
        densityMeV,
      )
    }
    if (energiesMeV[0] === 0 && densityMeV[0] !== 0) {
      refuse(['densityMeV', 0], `expected a spectral density of 0 at 0 meV; found ${densityMeV[0]} meV`, densityMeV[0])
    }
  })

/** hbar J in meV as a formula of E in meV. */
export const ExpressionTermSchema = z.strictObject({
  kind: z.literal('expression'),
  formula: z
    .string({ error: 'expected a formula of E as a text' })
    .trim()
    .min(1, { error: `expected a formula of ${formulaLanguage}; found an empty text` })
    .max(limits.formulaLength, { error: `expected a formula of at most ${limits.formulaLength} characters` })
    .superRefine((formula, context) => {
      try {
        readFormula(formula)
      } catch (error) {
        const message = error instanceof Error ? error.message : String(error)
        context.addIssue({ code: 'custom', message, input: formula })
      }
    }),
})

const bathKinds = [
  'powerLaw',
  'overdamped',
  'underdamped',
  'logNormal',
  'confinedExciton',
  'tabulated',
  'expression',
] as const

/** Further bath kinds join this union; the engine dispatches on `kind`. */
export const BathTermSchema = z.discriminatedUnion(
  'kind',
  [
    PowerLawTermSchema,
    OverdampedTermSchema,
    UnderdampedTermSchema,
    LogNormalTermSchema,
    ConfinedExcitonTermSchema,
    TabulatedTermSchema,
    ExpressionTermSchema,
  ],
  { error: `expected a bath term of kind ${bathKinds.map((kind) => `"${kind}"`).join(', ')}` },
)

export const ModeSchema = z.strictObject({
  label: z.string().max(limits.nameLength).default(''),
  energyMeV: q(quantities.modeEnergyMeV),
  huangRhys: q(quantities.huangRhys),
})

export const LaserSchema = z.strictObject({
  centerMeV: q(quantities.laserCenterMeV),
  fwhmMeV: q(quantities.laserFwhmMeV),
})

const gridSide = (max: number) =>
  z
    .int({ error: `expected a whole number of samples, 16 to ${max}` })
    .gte(16, { error: `expected at least 16 samples` })
    .lte(max, { error: `expected at most ${max} samples` })

/** Overrides of the grids that otherwise follow from the widths. Absent fields are chosen by the engine and shown. */
export const GridOverrideSchema = z.strictObject({
  linearTimeStepPs: q(quantities.timeStepPs).optional(),
  linearSamples: gridSide(limits.linearSamples).optional(),
  mapTimeStepPs: q(quantities.timeStepPs).optional(),
  mapSamples: gridSide(limits.mapSamples).optional(),
})

/**
 * A parameter set: the one definition of the form, the route bodies, the stored version, the job and the downloaded
 * file. Field names carry their unit. Defaults make a short file complete, so that the hash is always taken over the
 * complete set.
 */
export const ParameterSetSchema = z
  .strictObject({
    zeroPhononEnergyMeV: q(quantities.zeroPhononEnergyMeV),
    bath: z.array(BathTermSchema).max(limits.bathTerms).default([]),
    modes: z.array(ModeSchema).max(limits.modes).default([]),
    zeroPhononFwhmMeV: q(quantities.zeroPhononFwhmMeV).default(0),
    acousticBroadeningMeVPerK: q(quantities.acousticBroadeningMeVPerK).default(0),
    opticalBroadeningMeV: q(quantities.opticalBroadeningMeV).default(0),
    opticalPhononEnergyMeV: q(quantities.opticalPhononEnergyMeV).optional(),
    populationLifetimePs: q(quantities.populationLifetimePs).optional(),
    ensembleFwhmMeV: q(quantities.ensembleFwhmMeV).default(0),
    laser: LaserSchema.optional(),
    temperaturesK: z
      .array(q(quantities.temperatureK))
      .min(1, { error: 'expected at least one temperature' })
      .max(limits.temperatures, { error: `expected at most ${limits.temperatures} temperatures` })
      .superRefine(uniqueAscending('temperatures')),
    waitingTimesPs: z
      .array(q(quantities.waitingTimePs))
      .min(1, { error: 'expected at least one waiting time' })
      .max(limits.waitingTimes, { error: `expected at most ${limits.waitingTimes} waiting times` })
      .superRefine(uniqueAscending('waiting times')),
    grid: GridOverrideSchema.optional(),
  })
  .superRefine((set, context) => {
    if (set.opticalBroadeningMeV > 0 && set.opticalPhononEnergyMeV === undefined) {
      context.addIssue({
        code: 'custom',
        path: ['opticalPhononEnergyMeV'],
        message: 'expected an optical-phonon energy, because an optical-phonon broadening is given; found nothing',
        input: undefined,
      })
    }
    const maps = set.temperaturesK.length * set.waitingTimesPs.length
    if (maps > limits.mapsPerRun) {
      context.addIssue({
        code: 'custom',
        path: ['waitingTimesPs'],
        message: `expected at most ${limits.mapsPerRun} maps a run; found ${set.temperaturesK.length} temperatures x ${set.waitingTimesPs.length} waiting times = ${maps}`,
        input: set.waitingTimesPs,
      })
    }
  })

export type PowerLawTerm = z.infer<typeof PowerLawTermSchema>
export type OverdampedTerm = z.infer<typeof OverdampedTermSchema>
export type UnderdampedTerm = z.infer<typeof UnderdampedTermSchema>
export type LogNormalTerm = z.infer<typeof LogNormalTermSchema>
export type ConfinedExcitonTerm = z.infer<typeof ConfinedExcitonTermSchema>
export type TabulatedTerm = z.infer<typeof TabulatedTermSchema>
export type ExpressionTerm = z.infer<typeof ExpressionTermSchema>
export type BathTerm = z.infer<typeof BathTermSchema>
export type Mode = z.infer<typeof ModeSchema>
export type Laser = z.infer<typeof LaserSchema>
export type GridOverride = z.infer<typeof GridOverrideSchema>
export type ParameterSet = z.infer<typeof ParameterSetSchema>
export type ParameterSetInput = z.input<typeof ParameterSetSchema>
