import { z } from 'zod'

export const runStates = ['queued', 'running', 'done', 'failed', 'cancelled'] as const
export const RunStateSchema = z.enum(runStates)
export type RunState = z.infer<typeof RunStateSchema>

/** Body of a new run: which saved version is computed. */
export const RunRequestSchema = z.strictObject({
  setId: z.uuid(),
  version: z.int().min(1),
})
export type RunRequest = z.infer<typeof RunRequestSchema>

/** Payload of the queued job: ids only, so that the queue tables stay small and hold nobody's data. */
export const RunJobSchema = z.strictObject({ groupId: z.uuid(), runId: z.uuid() })
export type RunJob = z.infer<typeof RunJobSchema>

const finite = z.number()

export const GridDescriptionSchema = z.object({
  timeStepPs: finite,
  samples: z.int(),
  /** Length after zero padding. */
  paddedSamples: z.int(),
  energyStepMeV: finite,
  spanMeV: finite,
  /** Why the grid is what it is, one line for people. */
  reason: z.string(),
})
export type GridDescription = z.infer<typeof GridDescriptionSchema>

/** A measured quantity with its unit; null where the curve does not define it (a reason says why). */
export const MeasuredQuantitySchema = z.object({
  key: z.string(),
  name: z.string(),
  unit: z.string(),
  value: finite.nullable(),
  reason: z.string().optional(),
})
export type MeasuredQuantity = z.infer<typeof MeasuredQuantitySchema>

export const ArrayDescriptionSchema = z.object({
  key: z.string(),
  dataType: z.enum(['float64', 'float32', 'complex128', 'complex64']),
  shape: z.array(z.int()),
  unit: z.string(),
  sha256: z.string(),
})
export type ArrayDescription = z.infer<typeof ArrayDescriptionSchema>

/** What a finished run says about itself beside its arrays. Indices follow the set's lists. */
export const RunSummarySchema = z.object({
  engineVersion: z.string(),
  temperaturesK: z.array(finite),
  waitingTimesPs: z.array(finite),
  linearGrid: GridDescriptionSchema.array(),
  mapGrid: GridDescriptionSchema.array(),
  warnings: z.array(z.string()),
  /** What the engine chose and checked on the way, one line each. */
  notes: z.array(z.string()).default([]),
  /** Per temperature; entries with `waitingTimeIndex` belong to one map. */
  quantities: z.array(
    z.object({
      temperatureIndex: z.int(),
      waitingTimeIndex: z.int().nullable(),
      curve: z.string(),
      values: MeasuredQuantitySchema.array(),
    }),
  ),
  /** Largest error estimate of the line-broadening functions, relative to max(1, |g0|). */
  broadeningError: finite,
  arrays: ArrayDescriptionSchema.array(),
})
export type RunSummary = z.infer<typeof RunSummarySchema>
