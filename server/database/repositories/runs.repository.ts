import { and, count, desc, eq, gte, inArray, isNull, sql } from 'drizzle-orm'
import type { Role } from '../../../shared/schemas/roles'
import type { RunState } from '../../../shared/schemas/run'
import { limits } from '../../../shared/utils/limits'
import { memberships, parameterSets, parameterSetVersions, results, runs, users } from '../schema'
import type { GroupTx } from '../with-group'

export type RunRow = typeof runs.$inferSelect
type RunColumns = Omit<typeof runs.$inferInsert, 'id' | 'groupId' | 'changedAt' | 'startedAt' | 'finishedAt'>
/** Moments are the database's: `now`, or null for none. */
export type RunValues = Partial<RunColumns> & { startedAt?: 'now' | null; finishedAt?: 'now' | null }

/** Read inside a transaction, `now()` is its start; a stream that resumes needs the moment of the change. */
const moment = sql`clock_timestamp()`

const view = {
  run: runs,
  set: { id: parameterSets.id, name: parameterSets.name, version: parameterSetVersions.version },
  requestedBy: { id: users.id, name: users.name },
}

const selectRuns = (tx: GroupTx) =>
  tx
    .select(view)
    .from(runs)
    .innerJoin(parameterSetVersions, eq(parameterSetVersions.id, runs.setVersionId))
    .innerJoin(parameterSets, eq(parameterSets.id, parameterSetVersions.setId))
    .innerJoin(users, eq(users.id, runs.requestedBy))

export type RunView = Awaited<ReturnType<typeof selectRuns>>[number]

export const findRun = async (tx: GroupTx, groupId: string, runId: string): Promise<RunView | null> => {
  const [row] = await selectRuns(tx).where(and(eq(runs.groupId, groupId), eq(runs.id, runId)))
  return row ?? null
}

/** Newest first. */
export const listRuns = (tx: GroupTx, groupId: string, filter: { setId?: string }): Promise<RunView[]> =>
  selectRuns(tx)
    .where(and(eq(runs.groupId, groupId), filter.setId ? eq(parameterSets.id, filter.setId) : undefined))
    .orderBy(desc(runs.queuedAt), desc(runs.id))
    .limit(limits.listedRuns)

/** The row alone, locked: whoever changes a run holds this lock first, so that nobody waits in a circle. */
export const lockRun = async (tx: GroupTx, groupId: string, runId: string): Promise<RunRow | null> => {
  const [row] = await tx
    .select()
    .from(runs)
    .where(and(eq(runs.groupId, groupId), eq(runs.id, runId)))
    .for('update')
  return row ?? null
}

export const createRun = async (tx: GroupTx, values: typeof runs.$inferInsert): Promise<RunRow> => {
  const [row] = await tx
    .insert(runs)
    .values({ ...values, changedAt: moment })
    .returning()
  if (!row) throw new Error('expected the new run row; the insert returned none')
  return row
}

const toMoment = (value: 'now' | null | undefined) => (value === 'now' ? moment : value)

export const updateRun = async (
  tx: GroupTx,
  groupId: string,
  runId: string,
  { startedAt, finishedAt, ...values }: RunValues,
): Promise<RunRow | null> => {
  const [row] = await tx
    .update(runs)
    .set({ ...values, startedAt: toMoment(startedAt), finishedAt: toMoment(finishedAt), changedAt: moment })
    .where(and(eq(runs.groupId, groupId), eq(runs.id, runId)))
    .returning()
  return row ?? null
}

/** Null when this attempt no longer owns the run. Progress never falls, whatever order the reports come in. */
export const updateProgress = async (
  tx: GroupTx,
  groupId: string,
  runId: string,
  values: { attempt: number; progress: number; secondsLeft: number | null },
): Promise<RunRow | null> => {
  const [row] = await tx
    .update(runs)
    .set({
      progress: sql`greatest(${runs.progress}, ${values.progress}::float8)`,
      secondsLeft: values.secondsLeft,
      changedAt: moment,
    })
    .where(
      and(eq(runs.groupId, groupId), eq(runs.id, runId), eq(runs.attempt, values.attempt), eq(runs.state, 'running')),
    )
    .returning()
  return row ?? null
}

export const countQueuedRuns = async (tx: GroupTx, groupId: string): Promise<number> => {
  const [row] = await tx
    .select({ waiting: count() })
    .from(runs)
    .where(and(eq(runs.groupId, groupId), eq(runs.state, 'queued'), unfinished))
  return row?.waiting ?? 0
}

/** Said in the words of the partial index, so that PostgreSQL uses it. */
const unfinished = sql`${runs.state} in ('queued', 'running')`

/** Unfinished runs of the same computation, those that compute first. */
export const listTwins = (tx: GroupTx, groupId: string, inputHash: string): Promise<RunRow[]> =>
  tx
    .select()
    .from(runs)
    .where(and(eq(runs.groupId, groupId), eq(runs.inputHash, inputHash), unfinished))
    .orderBy(desc(runs.state), runs.queuedAt)

export const listUnfinishedRuns = (tx: GroupTx, groupId: string, states: RunState[]): Promise<RunRow[]> =>
  tx
    .select()
    .from(runs)
    .where(and(eq(runs.groupId, groupId), inArray(runs.state, states), unfinished))

/** Milliseconds since 1970 by the clock that also stamps the changes. */
export const readClock = async (tx: GroupTx): Promise<number> => {
  const { rows } = await tx.execute<{ now: number }>(sql`select (extract(epoch from ${moment}) * 1000)::float8 as now`)
  return rows[0]?.now ?? 0
}

/** Runs that changed since a moment, oldest change first; those that still go on when no moment is given. */
export const listChangedRuns = (tx: GroupTx, groupId: string, since: Date | null): Promise<RunRow[]> =>
  tx
    .select()
    .from(runs)
    .where(and(eq(runs.groupId, groupId), since ? gte(runs.changedAt, since) : unfinished))
    .orderBy(runs.changedAt)
    .limit(limits.listedRuns)

export const findRunnableVersion = async (tx: GroupTx, groupId: string, setId: string, version: number) => {
  const [row] = await tx
    .select({ id: parameterSetVersions.id, parameters: parameterSetVersions.parameters })
    .from(parameterSetVersions)
    .where(
      and(
        eq(parameterSetVersions.groupId, groupId),
        eq(parameterSetVersions.setId, setId),
        eq(parameterSetVersions.version, version),
      ),
    )
  return row ?? null
}

export const getParameters = async (tx: GroupTx, groupId: string, setVersionId: string) => {
  const [row] = await tx
    .select({ parameters: parameterSetVersions.parameters })
    .from(parameterSetVersions)
    .where(and(eq(parameterSetVersions.groupId, groupId), eq(parameterSetVersions.id, setVersionId)))
  if (!row) throw new Error(`parameter set version ${setVersionId}: expected a row; found none`)
  return row.parameters
}

export const findSummary = async (tx: GroupTx, groupId: string, resultId: string) => {
  const [row] = await tx
    .select({ summary: results.summary })
    .from(results)
    .where(and(eq(results.groupId, groupId), eq(results.id, resultId)))
  return row?.summary ?? null
}

/** Null when the person has left the group or may not sign in any more. */
export const findRequesterRole = async (tx: GroupTx, groupId: string, userId: string): Promise<Role | null> => {
  const [row] = await tx
    .select({ role: memberships.role })
    .from(memberships)
    .innerJoin(users, eq(users.id, memberships.userId))
    .where(and(eq(memberships.groupId, groupId), eq(memberships.userId, userId), isNull(users.disabledAt)))
  return row?.role ?? null
}
