import { availableParallelism } from 'node:os'
import { z } from 'zod'

const milliseconds = (fallback: number) => z.coerce.number().int().min(10).default(fallback)

/**
 * Everything about runs that an operator may set, read once from the environment. A wrong value stops the start with
 * the name of the variable, instead of surprising somebody in the middle of a run.
 */
const JobSettingsSchema = z.object({
  /** Threads of this process. The threads run at a lower priority, so that answering requests stays quick. */
  LINEWRIGHT_WORKER_THREADS: z.coerce.number().int().min(1).max(256).default(availableParallelism()),
  /** JavaScript heap of one thread. Typed arrays lie outside it: the estimate before a run bounds those. */
  LINEWRIGHT_WORKER_HEAP_MB: z.coerce.number().int().min(32).default(1024),
  /** Wall time of one computation, counted from the moment its thread starts it. */
  LINEWRIGHT_RUN_LIMIT_MS: milliseconds(2 * 60 * 60 * 1000),
  /** Time between asking a thread to stop and ending it. */
  LINEWRIGHT_STOP_GRACE_MS: milliseconds(1500),
  LINEWRIGHT_HEARTBEAT_MS: milliseconds(10_000),
  /** A heartbeat older than this means that the process which computed is gone or frozen. */
  LINEWRIGHT_HEARTBEAT_STALE_MS: milliseconds(30_000),
  /** How often every process looks for such attempts. */
  LINEWRIGHT_RESCUE_MS: milliseconds(5000),
})

export interface JobSettings {
  threads: number
  heapMb: number
  runLimitMs: number
  stopGraceMs: number
  heartbeatMs: number
  heartbeatStaleMs: number
  rescueMs: number
}

export const readJobSettings = (environment: NodeJS.ProcessEnv = process.env): JobSettings => {
  const parsed = JobSettingsSchema.safeParse(environment)
  if (!parsed.success) {
    const lines = parsed.error.issues.map((issue) => `${issue.path.join('.')}: ${issue.message}`)
    throw new Error(`The environment holds values that the queue cannot use:\n${lines.join('\n')}`)
  }
  const values = parsed.data
  if (values.LINEWRIGHT_HEARTBEAT_STALE_MS < 2 * values.LINEWRIGHT_HEARTBEAT_MS) {
    throw new Error(
      `LINEWRIGHT_HEARTBEAT_STALE_MS: expected at least twice LINEWRIGHT_HEARTBEAT_MS (${values.LINEWRIGHT_HEARTBEAT_MS}); found ${values.LINEWRIGHT_HEARTBEAT_STALE_MS}`,
    )
  }
  return {
    threads: values.LINEWRIGHT_WORKER_THREADS,
    heapMb: values.LINEWRIGHT_WORKER_HEAP_MB,
    runLimitMs: values.LINEWRIGHT_RUN_LIMIT_MS,
    stopGraceMs: values.LINEWRIGHT_STOP_GRACE_MS,
    heartbeatMs: values.LINEWRIGHT_HEARTBEAT_MS,
    heartbeatStaleMs: values.LINEWRIGHT_HEARTBEAT_STALE_MS,
    rescueMs: values.LINEWRIGHT_RESCUE_MS,
  }
}
