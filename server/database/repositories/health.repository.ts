import { sql } from 'drizzle-orm'
import type { Queries } from '../client'

export const countAppliedMigrations = async (db: Queries): Promise<number> => {
  const answer = await db.execute<{ count: string }>(sql`select count(*) as count from drizzle.__drizzle_migrations`)
  return Number(answer.rows[0]?.count ?? 0)
}

export const readOwnPowers = async (db: Queries): Promise<{ isSuperuser: boolean; bypassesRowSecurity: boolean }> => {
  const answer = await db.execute<{ super: boolean; bypass: boolean }>(
    sql`select rolsuper as super, rolbypassrls as bypass from pg_roles where rolname = current_user`,
  )
  const [role] = answer.rows
  return { isSuperuser: role?.super ?? false, bypassesRowSecurity: role?.bypass ?? false }
}
