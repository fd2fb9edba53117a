import { sql } from 'drizzle-orm'
import type { Queries } from '../client'
import { memberships, sessions, users } from '../schema'
import { sessionLimits } from './sessions.repository'

export interface StreamRights {
  sessionId: string
  groupId: string
}

/** Which of these sessions are still signed in and still belong to a member of the group. One query for all streams. */
export const filterAllowed = async (db: Queries, streams: StreamRights[]): Promise<StreamRights[]> => {
  const column = (values: string[]) =>
    sql`array[${sql.join(
      values.map((value) => sql`${value}::uuid`),
      sql`, `,
    )}]`
  const { rows } = await db.execute<{ session_id: string; group_id: string }>(sql`
    select asked.session_id, asked.group_id
    from unnest(
      ${column(streams.map(({ sessionId }) => sessionId))},
      ${column(streams.map(({ groupId }) => groupId))}
    ) as asked (session_id, group_id)
    join ${sessions} on ${sessions.id} = asked.session_id
    join ${users} on ${users.id} = ${sessions.userId} and ${users.disabledAt} is null
    join ${memberships} on ${memberships.userId} = ${users.id} and ${memberships.groupId} = asked.group_id
    where ${sessions.expiresAt} > now()
      and ${sessions.lastSeenAt} > now() - make_interval(days => ${sessionLimits.idleDays})`)
  return rows.map((row) => ({ sessionId: row.session_id, groupId: row.group_id }))
}
