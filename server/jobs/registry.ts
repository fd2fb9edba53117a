import type { z } from 'zod'
import type { Transaction, TransactionClient } from '../database/transaction'
import { RunJobSchema } from '../../shared/schemas/run'

/** Kinds of queued work. The list is closed: a process that lacks a handler for one of them refuses to start. */
export const jobNames = ['simulate'] as const
export type JobName = (typeof jobNames)[number]

interface JobDefinition {
  payload: z.ZodType
  /** Kept in the database by pg-boss. */
  queue: { retryLimit: number; expireInSeconds: number; retentionMinutes: number }
}

const hours = 60 * 60
const days = 24 * 60

export const jobs = {
  simulate: {
    payload: RunJobSchema,
    queue: {
      // Who repeats what is decided by the heartbeats of the attempts, which pg-boss 10 does not have. Its own expiry
      // only sweeps up entries that no attempt belongs to, so it lies far above the limit of a run.
      retryLimit: 0,
      expireInSeconds: 23 * hours,
      // An entry older than this would be archived without having been worked on.
      retentionMinutes: 366 * days,
    },
  },
} as const satisfies Record<JobName, JobDefinition>

export type JobPayload<Name extends JobName> = z.infer<(typeof jobs)[Name]['payload']>

/** One transaction, through Drizzle and through the plain driver. */
export interface JobTransaction {
  tx: Transaction
  client: TransactionClient
}

export interface JobEntry<Payload> {
  id: string
  turn: number
  payload: Payload
}

/** Written as methods, so that handlers of different payloads fit one list; `consume` parses before it calls. */
export interface JobHandler<Payload, Claim> {
  /**
   * Makes the work this process's own, in the very transaction that takes the entry from the queue: after a crash either
   * both happened or neither. Null when there is nothing to do; the entry is then completed.
   */
  claim(transaction: JobTransaction, entry: JobEntry<Payload>): Promise<Claim | null>
  /** Marks the work as failed when `claim` threw, so that one bad entry does not stop the queue. */
  refuse(transaction: JobTransaction, entry: JobEntry<Payload>): Promise<void>
  /** Does the work and stores how it ended. `signal`: this process is ending; hand the work back. Never throws. */
  work(claim: Claim, signal: AbortSignal): Promise<void>
}

export type JobHandlers = Record<JobName, JobHandler<unknown, unknown>>

/** Stops the start when the handlers are not exactly those of the registry. */
export const assertHandlers = (handlers: Record<string, unknown>): void => {
  const missing = jobNames.filter((name) => !handlers[name])
  const unknown = Object.keys(handlers).filter((name) => !(jobNames as readonly string[]).includes(name))
  if (missing.length + unknown.length === 0) return
  throw new Error(
    `job handlers: expected exactly ${jobNames.join(', ')}; missing: ${missing.join(', ') || 'none'}; unknown: ${unknown.join(', ') || 'none'}`,
  )
}
