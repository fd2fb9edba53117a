import { and, eq, sql } from 'drizzle-orm'
import type { Queries } from '../client'
import { runAttempts } from '../schema'

export type AttemptRow = typeof runAttempts.$inferSelect

const now = sql`clock_timestamp()`
const silentMs = sql<number>`(extract(epoch from ${now} - ${runAttempts.heartbeatAt}) * 1000)::float8`

/** Takes the place of whatever attempt the run had before. */
export const createAttempt = async (
  db: Queries,
  values: Omit<AttemptRow, 'startedAt' | 'heartbeatAt'>,
): Promise<void> => {
  const row = { ...values, startedAt: now, heartbeatAt: now }
  await db.insert(runAttempts).values(row).onConflictDoUpdate({ target: runAttempts.runId, set: row })
}

/** Says that the attempt lives. False when it no longer owns the run. */
export const touchAttempt = async (db: Queries, runId: string, attempt: number): Promise<boolean> => {
  const rows = await db
    .update(runAttempts)
    .set({ heartbeatAt: now })
    .where(and(eq(runAttempts.runId, runId), eq(runAttempts.attempt, attempt)))
    .returning({ runId: runAttempts.runId })
  return rows.length === 1
}

export const removeAttempt = async (db: Queries, runId: string): Promise<void> => {
  await db.delete(runAttempts).where(eq(runAttempts.runId, runId))
}

/** All attempts of all groups, with the age of their heartbeat by the database's clock. */
export const listAttempts = (db: Queries): Promise<(AttemptRow & { silentMs: number })[]> =>
  db
    .select({
      runId: runAttempts.runId,
      groupId: runAttempts.groupId,
      jobId: runAttempts.jobId,
      attempt: runAttempts.attempt,
      workerId: runAttempts.workerId,
      startedAt: runAttempts.startedAt,
      heartbeatAt: runAttempts.heartbeatAt,
      silentMs,
    })
    .from(runAttempts)

/** Locks the row of the attempt and tells how long it has been silent; null when it no longer owns the run. */
export const lockAttempt = async (db: Queries, runId: string, attempt: number): Promise<number | null> => {
  const [row] = await db
    .select({ silentMs })
    .from(runAttempts)
    .where(and(eq(runAttempts.runId, runId), eq(runAttempts.attempt, attempt)))
    .for('update')
  return row?.silentMs ?? null
}
