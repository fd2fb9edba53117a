import { and, eq, isNull } from 'drizzle-orm'
import type { Queries } from '../client'
import { users } from '../schema'

export interface UserRow {
  id: string
  email: string
  name: string
  passwordHash: string
}

const columns = { id: users.id, email: users.email, name: users.name, passwordHash: users.passwordHash }

/** Carries the password hash: for the account service only. */
export const findUserByEmail = async (db: Queries, email: string): Promise<UserRow | null> => {
  const [row] = await db
    .select(columns)
    .from(users)
    .where(and(eq(users.email, email), isNull(users.disabledAt)))
  return row ?? null
}

export const getUser = async (db: Queries, userId: string): Promise<UserRow> => {
  const [row] = await db.select(columns).from(users).where(eq(users.id, userId))
  if (!row) throw new Error(`expected the user ${userId}; found none`)
  return row
}

/** Null when the address is taken: decided by the unique index, so that two at once cannot both win. */
export const createUser = async (
  db: Queries,
  values: { email: string; name: string; passwordHash: string; isDemo?: boolean },
): Promise<string | null> => {
  const [row] = await db.insert(users).values(values).onConflictDoNothing().returning({ id: users.id })
  return row?.id ?? null
}

export const updatePasswordHash = async (db: Queries, userId: string, passwordHash: string): Promise<void> => {
  await db.update(users).set({ passwordHash }).where(eq(users.id, userId))
}
