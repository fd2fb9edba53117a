import { and, desc, eq, sql } from 'drizzle-orm'
import type { ParameterSet } from '../../../shared/schemas/parameter-set'
import { parameterSets, parameterSetVersions, users } from '../schema'
import type { GroupTx } from '../with-group'

const setColumns = {
  id: parameterSets.id,
  name: parameterSets.name,
  latestVersion: parameterSets.latestVersion,
  updatedAt: parameterSets.updatedAt,
}
const author = { id: users.id, name: users.name }

const versionItemColumns = {
  version: parameterSetVersions.version,
  contentHash: parameterSetVersions.contentHash,
  note: parameterSetVersions.note,
  createdAt: parameterSetVersions.createdAt,
  createdBy: author,
}

const ofSet = (groupId: string, setId: string) => and(eq(parameterSets.groupId, groupId), eq(parameterSets.id, setId))
const versionsOfSet = (groupId: string, setId: string) =>
  and(eq(parameterSetVersions.groupId, groupId), eq(parameterSetVersions.setId, setId))

export const listSets = (tx: GroupTx, groupId: string) =>
  tx
    .select({ ...setColumns, createdBy: author })
    .from(parameterSets)
    .innerJoin(users, eq(users.id, parameterSets.createdBy))
    .where(eq(parameterSets.groupId, groupId))
    .orderBy(desc(parameterSets.updatedAt), desc(parameterSets.id))

export const countSets = (tx: GroupTx, groupId: string): Promise<number> =>
  tx.$count(parameterSets, eq(parameterSets.groupId, groupId))

export const findSet = async (tx: GroupTx, groupId: string, setId: string) => {
  const [row] = await tx.select(setColumns).from(parameterSets).where(ofSet(groupId, setId))
  return row ?? null
}

/** Holds the set until the transaction ends, so that two savers get two versions one after the other. */
export const findSetForUpdate = async (tx: GroupTx, groupId: string, setId: string) => {
  const [row] = await tx.select(setColumns).from(parameterSets).where(ofSet(groupId, setId)).for('update')
  return row ?? null
}

export const createSet = async (
  tx: GroupTx,
  groupId: string,
  values: { name: string; createdBy: string },
): Promise<string> => {
  const [row] = await tx
    .insert(parameterSets)
    .values({ ...values, groupId })
    .returning({ id: parameterSets.id })
  if (!row) throw new Error('expected the new parameter set; the insert returned none')
  return row.id
}

export const updateSet = async (
  tx: GroupTx,
  groupId: string,
  setId: string,
  values: { name?: string; latestVersion?: number },
): Promise<boolean> => {
  const updated = await tx
    .update(parameterSets)
    .set({ ...values, updatedAt: sql`now()` })
    .where(ofSet(groupId, setId))
    .returning({ id: parameterSets.id })
  return updated.length > 0
}

export const removeSet = async (tx: GroupTx, groupId: string, setId: string): Promise<boolean> => {
  const removed = await tx.delete(parameterSets).where(ofSet(groupId, setId)).returning({ id: parameterSets.id })
  return removed.length > 0
}

export const createVersion = async (
  tx: GroupTx,
  groupId: string,
  values: {
    setId: string
    version: number
    parameters: ParameterSet
    contentHash: string
    note: string
    createdBy: string
  },
): Promise<void> => {
  await tx.insert(parameterSetVersions).values({ ...values, groupId })
}

export const listVersions = (tx: GroupTx, groupId: string, setId: string) =>
  tx
    .select(versionItemColumns)
    .from(parameterSetVersions)
    .innerJoin(users, eq(users.id, parameterSetVersions.createdBy))
    .where(versionsOfSet(groupId, setId))
    .orderBy(desc(parameterSetVersions.version))

export const findVersion = async (tx: GroupTx, groupId: string, setId: string, version: number) => {
  const [row] = await tx
    .select({ ...versionItemColumns, id: parameterSetVersions.id, parameters: parameterSetVersions.parameters })
    .from(parameterSetVersions)
    .innerJoin(users, eq(users.id, parameterSetVersions.createdBy))
    .where(and(versionsOfSet(groupId, setId), eq(parameterSetVersions.version, version)))
  return row ?? null
}
