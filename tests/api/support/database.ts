import pg from 'pg'
import { inject } from 'vitest'

/** SQL as the application role, in one transaction; with a group, inside that group's fence. */
export const sqlAs = async <Row extends pg.QueryResultRow = pg.QueryResultRow>(
  url: string,
  text: string,
  values: unknown[] = [],
  groupId?: string,
): Promise<Row[]> => {
  const client = new pg.Client({ connectionString: url })
  await client.connect()
  try {
    await client.query('begin')
    if (groupId) await client.query(`select set_config('app.group_id', $1, true)`, [groupId])
    const { rows } = await client.query<Row>(text, values)
    await client.query('commit')
    return rows
  } finally {
    await client.end()
  }
}

export const sql = <Row extends pg.QueryResultRow = pg.QueryResultRow>(
  text: string,
  values: unknown[] = [],
  groupId?: string,
) => sqlAs<Row>(inject('databaseUrl'), text, values, groupId)

/** Tables whose rows belong to groups, read from the policies of the live database. */
export const listGroupTables = async (): Promise<string[]> => {
  const rows = await sql<{ name: string }>(
    `select tablename as name from pg_policies where schemaname = 'public' order by 1`,
  )
  return rows.map(({ name }) => name)
}

/**
 * One hash over every row of every table as its owner sees them group by group: whether anything changed. When a
 * session was last seen is left out, because reading is what changes it.
 */
export const hashOfAllRows = async (groupIds: string[]): Promise<string> => {
  const groupTables = await listGroupTables()
  const parts: string[] = []
  const take = async (table: string, groupId?: string) => {
    const row = table === 'sessions' ? `(to_jsonb(t) - 'last_seen_at')::text` : 't::text'
    const [found] = await sql<{ hash: string }>(
      `select md5(coalesce(string_agg(${row}, '|' order by ${row}), '')) as hash from ${table} t`,
      [],
      groupId,
    )
    parts.push(`${table} ${groupId ?? ''} ${found?.hash}`)
  }
  for (const table of ['users', 'sessions', 'groups', 'memberships']) await take(table)
  for (const groupId of groupIds) for (const table of groupTables) await take(table, groupId)
  return parts.join('\n')
}
