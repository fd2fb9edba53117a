import { and, asc, eq } from 'drizzle-orm'
import type { Role } from '../../../shared/schemas/roles'
import type { Queries } from '../client'
import { groups, measurements, memberships, parameterSets, runs, users } from '../schema'
import type { GroupTx } from '../with-group'

export interface GroupOfUser {
  id: string
  name: string
  role: Role
  isDemo: boolean
}

export const listGroupsOfUser = (db: Queries, userId: string): Promise<GroupOfUser[]> =>
  db
    .select({ id: groups.id, name: groups.name, role: memberships.role, isDemo: groups.isDemo })
    .from(memberships)
    .innerJoin(groups, eq(groups.id, memberships.groupId))
    .where(eq(memberships.userId, userId))
    .orderBy(asc(groups.name), asc(groups.id))

/** The group as this user sees it; null when it does not exist or the user is no member: nobody can tell which. */
export const findGroupOfUser = async (db: Queries, groupId: string, userId: string): Promise<GroupOfUser | null> => {
  const [row] = await db
    .select({ id: groups.id, name: groups.name, role: memberships.role, isDemo: groups.isDemo })
    .from(memberships)
    .innerJoin(groups, eq(groups.id, memberships.groupId))
    .where(and(eq(memberships.groupId, groupId), eq(memberships.userId, userId)))
  return row ?? null
}

export const listMembers = (db: Queries, groupId: string) =>
  db
    .select({ id: users.id, name: users.name, role: memberships.role })
    .from(memberships)
    .innerJoin(users, eq(users.id, memberships.userId))
    .where(eq(memberships.groupId, groupId))
    .orderBy(asc(users.name), asc(users.id))

export const createGroup = async (
  db: Queries,
  values: { name: string; createdBy: string; isDemo?: boolean },
): Promise<{ id: string; name: string; isDemo: boolean }> => {
  const [row] = await db
    .insert(groups)
    .values(values)
    .returning({ id: groups.id, name: groups.name, isDemo: groups.isDemo })
  if (!row) throw new Error('expected the new group row; the insert returned none')
  return row
}

export const createMembership = async (
  db: Queries,
  values: { groupId: string; userId: string; role: Role },
): Promise<void> => {
  await db.insert(memberships).values(values)
}

export const countObjects = async (
  tx: GroupTx,
  groupId: string,
): Promise<{ sets: number; runs: number; measurements: number }> => ({
  sets: await tx.$count(parameterSets, eq(parameterSets.groupId, groupId)),
  runs: await tx.$count(runs, eq(runs.groupId, groupId)),
  measurements: await tx.$count(measurements, eq(measurements.groupId, groupId)),
})
