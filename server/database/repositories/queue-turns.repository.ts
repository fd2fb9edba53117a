import { eq, sql } from 'drizzle-orm'
import type { Queries } from '../client'
import { queueTurns } from '../schema'

/**
 * The turn of a group's next run: the one after its last, but never before the turn being served now, so that a group
 * that comes late does not overtake with all it has. `waiting` runs of the group can have taken no more than so many
 * turns from now: cancelled ones do not push its next run back.
 */
export const takeTurn = async (db: Queries, groupId: string, waiting: number): Promise<number> => {
  const served = sql`(select coalesce(max(${queueTurns.servedTurn}), 0) from ${queueTurns})`
  const [row] = await db
    .insert(queueTurns)
    .values({ groupId, queuedTurn: sql`${served} + 1` })
    .onConflictDoUpdate({
      target: queueTurns.groupId,
      set: {
        queuedTurn: sql`least(greatest(${queueTurns.queuedTurn}, ${served}), ${served} + ${waiting}::int) + 1`,
      },
    })
    .returning({ turn: queueTurns.queuedTurn })
  if (!row) throw new Error(`turn of group ${groupId}: expected a row; the statement returned none`)
  return row.turn
}

export const serveTurn = async (db: Queries, groupId: string, turn: number): Promise<void> => {
  await db
    .update(queueTurns)
    .set({ servedTurn: sql`greatest(${queueTurns.servedTurn}, ${turn}::int)` })
    .where(eq(queueTurns.groupId, groupId))
}

/** Every group that ever queued a run. */
export const listQueueingGroups = async (db: Queries): Promise<string[]> => {
  const rows = await db.select({ groupId: queueTurns.groupId }).from(queueTurns)
  return rows.map((row) => row.groupId)
}
