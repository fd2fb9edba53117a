import { z } from 'zod'
import { limits } from '../utils/limits'
import { BathTermSchema, LaserSchema, ModeSchema } from './parameter-set'
import { quantities } from './quantities'
import { quantitySchema } from './quantity'

/**
 * Requests of the engine's command line: one physical quantity of one model at one temperature. Fields carry the names
 * and units of the parameter set; what is left out is 0 or empty.
 */
const q = quantitySchema

const modelFields = {
  bath: z.array(BathTermSchema).max(limits.bathTerms).default([]),
  modes: z.array(ModeSchema).max(limits.modes).default([]),
  temperatureK: q(quantities.temperatureK),
}

const lineFields = {
  ...modelFields,
  zeroPhononEnergyMeV: q(quantities.zeroPhononEnergyMeV).default(quantities.zeroPhononEnergyMeV.min),
  zeroPhononFwhmMeV: q(quantities.zeroPhononFwhmMeV).default(0),
  ensembleFwhmMeV: q(quantities.ensembleFwhmMeV).default(0),
  populationLifetimePs: q(quantities.populationLifetimePs).optional(),
  laser: LaserSchema.optional(),
}

const positive = z.number().positive()
const finite = z.number()
const axis = { axis: z.string().optional(), unit: z.string().optional() }
const points = <T extends z.ZodType>(point: T) => z.array(point).min(1).max(100_000)
const samplesOf = <T extends z.ZodType>(point: T, extra: Record<string, z.ZodType> = {}) =>
  z.strictObject({ ...axis, points: points(point), ...extra })
const pair = z.tuple([finite, finite])
const triple = z.tuple([finite.min(0), finite.min(0), finite.min(0)])
const vector = z.tuple([finite, finite, finite])
const orders = z.array(z.int().min(0).max(60)).min(1).max(60)

const request = <Q extends string, P extends z.ZodRawShape, S extends z.ZodType>(
  quantity: Q,
  parameters: P,
  samples?: S,
) =>
  z.object({
    id: z.union([z.string(), z.number()]).optional(),
    quantity: z.literal(quantity),
    parameters: z.strictObject(parameters),
    samples: (samples ?? z.unknown().optional()) as S,
  })

const grid = { samples: z.int().min(2).max(4096), timeStepPs: q(quantities.timeStepPs) }
const energies = samplesOf(finite)
const velocity = positive.max(50_000)

export const EngineRequestSchema = z.discriminatedUnion('quantity', [
  request('lineBroadeningG0', modelFields, samplesOf(finite.min(0).max(1e6))),
  request(
    'spectralDensity',
    { ...modelFields, temperatureK: modelFields.temperatureK.default(0) },
    samplesOf(finite.min(0)),
  ),
  request('absorption', lineFields, energies),
  request('fluorescence', lineFields, energies),
  request('absorptionFwhm', lineFields),
  request(
    'linearSampled',
    { ...lineFields, ...grid, samples: z.int().min(2).max(65_536) },
    samplesOf(z.int(), { energiesMeV: z.array(finite).optional() }),
  ),
  request(
    'huangRhysLineWeights',
    { modes: z.array(ModeSchema).length(1), temperatureK: modelFields.temperatureK },
    samplesOf(z.int().min(-500).max(500)),
  ),
  request('zeroPhononWeight', modelFields),
  request('moments', { ...modelFields, ensembleFwhmMeV: lineFields.ensembleFwhmMeV }),
  request('reorganizationEnergy', { ...modelFields, temperatureK: modelFields.temperatureK.default(0) }),
  request('thirdOrderPathways', lineFields, samplesOf(triple)),
  request(
    'twoDimensionalSpectra',
    { ...lineFields, waitingTimePs: q(quantities.waitingTimePs).default(0) },
    samplesOf(pair),
  ),
  request(
    'twoDimensionalSpectraSampled',
    { ...lineFields, ...grid, waitingTimePs: q(quantities.waitingTimePs).default(0) },
    samplesOf(z.tuple([z.int(), z.int()])),
  ),
  request('sphereTorsionalEigenvalues', { l: orders, n: orders }),
  request('sphereSpheroidalEigenvalues', {
    velocityRatios: z.array(positive.max(20)).min(1).max(100),
    l: orders,
    n: orders,
  }),
  request('sphereModeEnergies', {
    radiusNm: positive.max(1e6),
    longitudinalVelocityMPerS: velocity,
    transverseVelocityMPerS: velocity,
    torsionalL: orders.default([1, 2]),
    spheroidalL: orders.default([0, 1, 2]),
    n: orders.default([0, 1]),
  }),
  request('isotropicOrientationalFactor', {
    order: z.string().optional(),
    rows: z
      .array(
        z.strictObject({
          polarizationAnglesDeg: z.tuple([finite, finite, finite, finite]),
          dipoles: z.union([z.string().regex(/^[xyz]{4}$/), z.tuple([vector, vector, vector, vector])]),
        }),
      )
      .max(10_000)
      .optional(),
  }),
  request('kuboFwhm', {
    rows: z
      .array(
        z.strictObject({
          fluctuationAmplitudeMeV: positive.max(1000),
          correlationTimePs: positive.max(1000),
          regime: z.enum(['fast', 'slow']).optional(),
        }),
      )
      .min(1)
      .max(1000),
  }),
  request('voigtFwhm', {
    rows: z
      .array(z.strictObject({ lorentzianFwhmMeV: finite.min(0), gaussianFwhmMeV: finite.min(0) }))
      .min(1)
      .max(10_000),
  }),
  request('lorentzianFwhm', { coherenceTimesPs: z.array(positive).min(1).max(10_000) }),
])

export type EngineRequest = z.output<typeof EngineRequestSchema>
export type EngineQuantity = EngineRequest['quantity']
export type RequestOf<Q extends EngineQuantity> = Extract<EngineRequest, { quantity: Q }>
