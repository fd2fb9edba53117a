import { sql } from 'drizzle-orm'
import type { Queries } from '../client'

export const countAppliedMigrations = async (db: Queries): Promise<number> => {
  const answer = await db.execute<{ count: string }>(sql`select count(*) as count from drizzle.__drizzle_migrations`)
  return Number(answer.rows[0]?.count ?? 0)
}
