import { eq, lt, sql } from 'drizzle-orm'
import type { Queries } from '../client'
import { signInFailures } from '../schema'

/** After `free` attempts each further one waits twice as long as the one before, from `firstSeconds` to `capSeconds`. */
export interface Pace {
  free: number
  firstSeconds: number
  capSeconds: number
}

/**
 * Counts an attempt before it is made, in one statement: however many arrive at once, at whichever instance, each gets
 * its own number. Answers 0 when it may go on, else the seconds until the next may.
 */
export const takeAttempt = async (db: Queries, key: string, pace: Pace): Promise<number> => {
  const over = sql`attempts.window_started_at < now() - interval '1 day'`
  const next = sql`(case when ${over} then 1 else attempts.failures + 1 end)`
  const wait = (failures: typeof next) => sql`case when ${failures} >= ${pace.free}::int
    then now() + make_interval(secs => least(${pace.capSeconds}::float8, ${pace.firstSeconds}::float8 * power(2, least(${failures} - ${pace.free}::int, 30))))
    end`
  const taken = await db.execute(sql`
    insert into sign_in_failures as attempts (key, failures, blocked_until) values (${key}, 1, ${wait(sql`1`)})
    on conflict (key) do update set
      failures = ${next},
      window_started_at = case when ${over} then now() else attempts.window_started_at end,
      blocked_until = ${wait(next)}
    where attempts.blocked_until is null or attempts.blocked_until <= now()
    returning failures`)
  if (taken.rows.length > 0) return 0
  const blocked = await db.execute<{ seconds: string }>(sql`
    select ceil(extract(epoch from blocked_until - now())) as seconds from sign_in_failures where key = ${key}`)
  return Math.max(1, Number(blocked.rows[0]?.seconds ?? 1))
}

export const forgetAttempts = async (db: Queries, key: string): Promise<void> => {
  await db.delete(signInFailures).where(eq(signInFailures.key, key))
}

/** Takes back the one attempt that turned out right, and nothing of the wrong ones before it. */
export const giveBackAttempt = async (db: Queries, key: string, pace: Pace): Promise<void> => {
  await db
    .update(signInFailures)
    .set({
      failures: sql`greatest(${signInFailures.failures} - 1, 0)`,
      blockedUntil: sql`case when ${signInFailures.failures} - 1 >= ${pace.free}::int then ${signInFailures.blockedUntil} end`,
    })
    .where(eq(signInFailures.key, key))
}

export const removeOldAttempts = async (db: Queries): Promise<void> => {
  await db.delete(signInFailures).where(lt(signInFailures.windowStartedAt, sql`now() - interval '2 days'`))
}
