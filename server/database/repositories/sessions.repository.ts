import { and, desc, eq, gt, isNull, ne, sql } from 'drizzle-orm'
import type { Queries } from '../client'
import { sessions, users } from '../schema'

/** A session ends when nobody used it for a week, and after thirty days in any case. Judged by the database's clock. */
export const sessionLimits = { idleDays: 7, absoluteDays: 30 } as const

const days = (count: number) => sql`make_interval(days => ${count})`

const alive = and(
  gt(sessions.expiresAt, sql`now()`),
  gt(sessions.lastSeenAt, sql`now() - ${days(sessionLimits.idleDays)}`),
  isNull(users.disabledAt),
)

export interface SessionRow {
  sessionId: string
  /** Since the password was last given, by the database's clock. */
  minutesSinceConfirmed: number
  /** True when `last_seen_at` is old enough to be written again. */
  stale: boolean
  user: { id: string; email: string; name: string }
}

export const findSession = async (db: Queries, tokenHash: string): Promise<SessionRow | null> => {
  const [row] = await db
    .select({
      sessionId: sessions.id,
      minutesSinceConfirmed: sql<number>`extract(epoch from now() - ${sessions.confirmedAt})::float8 / 60`,
      stale: sql<boolean>`${sessions.lastSeenAt} < now() - interval '1 minute'`,
      user: { id: users.id, email: users.email, name: users.name },
    })
    .from(sessions)
    .innerJoin(users, eq(users.id, sessions.userId))
    .where(and(eq(sessions.tokenHash, tokenHash), alive))
  return row ?? null
}

export const touchSession = async (db: Queries, sessionId: string): Promise<void> => {
  await db
    .update(sessions)
    .set({ lastSeenAt: sql`now()` })
    .where(eq(sessions.id, sessionId))
}

export const createSession = async (
  db: Queries,
  values: { userId: string; tokenHash: string; userAgent: string },
): Promise<string> => {
  const [row] = await db
    .insert(sessions)
    .values({ ...values, expiresAt: sql`now() + ${days(sessionLimits.absoluteDays)}` })
    .returning({ id: sessions.id })
  if (!row) throw new Error('expected the new session row; the insert returned none')
  return row.id
}

export const listSessions = (db: Queries, userId: string) =>
  db
    .select({
      id: sessions.id,
      userAgent: sessions.userAgent,
      createdAt: sessions.createdAt,
      lastSeenAt: sessions.lastSeenAt,
      expiresAt: sessions.expiresAt,
    })
    .from(sessions)
    .innerJoin(users, eq(users.id, sessions.userId))
    .where(and(eq(sessions.userId, userId), alive))
    .orderBy(desc(sessions.lastSeenAt))

/** True when the user had such a session. */
export const removeSession = async (db: Queries, userId: string, sessionId: string): Promise<boolean> => {
  const removed = await db
    .delete(sessions)
    .where(and(eq(sessions.userId, userId), eq(sessions.id, sessionId)))
    .returning({ id: sessions.id })
  return removed.length > 0
}

/** Who was signed in with it; null when nobody was. */
export const removeSessionByToken = async (db: Queries, tokenHash: string): Promise<string | null> => {
  const [removed] = await db
    .delete(sessions)
    .where(eq(sessions.tokenHash, tokenHash))
    .returning({ userId: sessions.userId })
  return removed?.userId ?? null
}

export const confirmSession = async (db: Queries, sessionId: string): Promise<void> => {
  await db
    .update(sessions)
    .set({ confirmedAt: sql`now()` })
    .where(eq(sessions.id, sessionId))
}

export const removeSessionsOf = async (db: Queries, userId: string, exceptId?: string): Promise<number> => {
  const removed = await db
    .delete(sessions)
    .where(and(eq(sessions.userId, userId), exceptId ? ne(sessions.id, exceptId) : undefined))
    .returning({ id: sessions.id })
  return removed.length
}

/** Rows of sessions that ended by themselves. */
export const removeDeadSessions = async (db: Queries): Promise<void> => {
  await db
    .delete(sessions)
    .where(sql`${sessions.expiresAt} < now() or ${sessions.lastSeenAt} < now() - ${days(sessionLimits.idleDays)}`)
}
