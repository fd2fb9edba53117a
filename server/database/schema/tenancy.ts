import { sql } from 'drizzle-orm'
import { pgPolicy } from 'drizzle-orm/pg-core'

/**
 * Second fence against a forgotten WHERE: rows of a group's table exist only inside a transaction that named its group
 * (`withGroup`). The migration also FORCEs row level security, so that the table owner obeys as well.
 */
export const groupPolicy = (table: string) =>
  pgPolicy(`${table}_of_group`, {
    as: 'permissive',
    for: 'all',
    to: 'public',
    using: sql`group_id = nullif(current_setting('app.group_id', true), '')::uuid`,
    withCheck: sql`group_id = nullif(current_setting('app.group_id', true), '')::uuid`,
  })
