import { z } from 'zod'
import type { Issue } from '../errors/app-error'
import { readingFields, TableReadingSchema, type TableProposal } from './measurement'
import type { ReportPort } from './worker-messages'

const port = z.custom<ReportPort>((value) => typeof (value as ReportPort | undefined)?.postMessage === 'function', {
  error: 'expected a message port',
})

/** What is asked of a table: a first proposal, the proposal again under a corrected reading, or the numbers. */
export const TableTaskSchema = z.discriminatedUnion('task', [
  z.strictObject({ task: z.literal('propose') }),
  z.strictObject({
    task: z.literal('proposeWith'),
    reading: TableReadingSchema,
    answered: z.array(z.enum(readingFields)),
  }),
  z.strictObject({ task: z.literal('read'), reading: TableReadingSchema }),
])
export type TableTask = z.infer<typeof TableTaskSchema>

/** What the thread that reads tables is told. It opens the file itself, so that its bytes cross no thread. */
export const TableMessageSchema = z.strictObject({
  path: z.string().min(1),
  work: TableTaskSchema,
  stop: z.instanceof(Int32Array),
  port,
})

export interface StoredSpectrum {
  energiesMeV: Float64Array
  values: Float64Array
  uncertainties: Float64Array | null
}

export type TableAnswer =
  | { ok: true; proposal: TableProposal }
  | { ok: true; spectrum: StoredSpectrum }
  | { ok: false; code: string; message: string; issues: Issue[] }
