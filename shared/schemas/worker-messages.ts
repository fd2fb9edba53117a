import { z } from 'zod'
import { ParameterSetSchema } from './parameter-set'

/** What a thread says while it works. The answer itself is the return value of its function. */
export type WorkerReport = { type: 'started' } | { type: 'progress'; fraction: number }

/** The end of a MessageChannel; described by what is used of it, because shared code knows no Node types. */
export interface ReportPort {
  postMessage: (report: WorkerReport) => void
}

/** What the thread that computes line shapes is told: the set, one shared integer (not 0: stop) and where to report. */
export const SimulateMessageSchema = z.strictObject({
  parameters: ParameterSetSchema,
  stop: z.instanceof(Int32Array),
  port: z.custom<ReportPort>((value) => typeof (value as ReportPort | undefined)?.postMessage === 'function', {
    error: 'expected a message port',
  }),
})
export type SimulateMessage = z.infer<typeof SimulateMessageSchema>
