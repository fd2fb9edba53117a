import { and, eq, inArray, lt, notExists, sql } from 'drizzle-orm'
import { files, groups, measurements } from '../schema'
import type { Queries } from '../client'
import type { GroupTx } from '../with-group'

const columns = {
  id: files.id,
  name: files.name,
  byteLength: files.byteLength,
  sha256: files.sha256,
  storageKey: files.storageKey,
  createdAt: files.createdAt,
}

const ofFile = (groupId: string, fileId: string) => and(eq(files.groupId, groupId), eq(files.id, fileId))

export interface FileRow {
  id: string
  name: string
  byteLength: number
  sha256: string
  storageKey: string
  createdAt: Date
}

/** Lets one transaction at a time decide about the group's room for files, until it ends. */
export const lockFileRoom = async (tx: GroupTx, groupId: string): Promise<void> => {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`files of ${groupId}`}, 0))`)
}

export const measureFileRoom = async (tx: GroupTx, groupId: string): Promise<{ count: number; bytes: number }> => {
  const [row] = await tx
    .select({
      count: sql<number>`count(*)::int`,
      // A sum of integers is a bigint, which the driver gives as text; it stays far below 2^53.
      bytes: sql<number>`coalesce(sum(${files.byteLength}), 0)::float8`,
    })
    .from(files)
    .where(eq(files.groupId, groupId))
  return row ?? { count: 0, bytes: 0 }
}

export const createFile = async (
  tx: GroupTx,
  groupId: string,
  values: { storageKey: string; name: string; byteLength: number; sha256: string; createdBy: string },
): Promise<FileRow> => {
  const [row] = await tx
    .insert(files)
    .values({ ...values, groupId })
    .returning(columns)
  if (!row) throw new Error('expected the new file; the insert returned none')
  return row
}

export const findFile = async (tx: GroupTx, groupId: string, fileId: string): Promise<FileRow | null> => {
  const [row] = await tx.select(columns).from(files).where(ofFile(groupId, fileId))
  return row ?? null
}

/** Removes the row and returns the key under which the bytes lie; null when there was none. */
export const removeFile = async (tx: GroupTx, groupId: string, fileId: string): Promise<string | null> => {
  const [row] = await tx.delete(files).where(ofFile(groupId, fileId)).returning({ storageKey: files.storageKey })
  return row?.storageKey ?? null
}

const isUnused = (tx: GroupTx, groupId: string) =>
  notExists(
    tx
      .select({ one: sql`1` })
      .from(measurements)
      .where(and(eq(measurements.groupId, groupId), eq(measurements.fileId, files.id))),
  )

/** Removes one file when no measurement uses it. */
export const removeFileIfUnused = async (tx: GroupTx, groupId: string, fileId: string): Promise<string | null> => {
  const [row] = await tx
    .delete(files)
    .where(and(ofFile(groupId, fileId), isUnused(tx, groupId)))
    .returning({ storageKey: files.storageKey })
  return row?.storageKey ?? null
}

/** Removes the uploads that nobody made a measurement of within the given days. */
export const removeForgottenFiles = async (tx: GroupTx, groupId: string, days: number): Promise<string[]> => {
  const rows = await tx
    .delete(files)
    .where(
      and(
        eq(files.groupId, groupId),
        lt(files.createdAt, sql`now() - make_interval(days => ${days})`),
        isUnused(tx, groupId),
      ),
    )
    .returning({ storageKey: files.storageKey })
  return rows.map((row) => row.storageKey)
}

/** Those of the given keys that a file of the group has. */
export const findKnownKeys = async (tx: GroupTx, groupId: string, keys: readonly string[]): Promise<string[]> => {
  const rows = await tx
    .select({ storageKey: files.storageKey })
    .from(files)
    .where(and(eq(files.groupId, groupId), inArray(files.storageKey, [...keys])))
  return rows.map((row) => row.storageKey)
}

export const listGroupIds = async (db: Queries): Promise<string[]> =>
  (await db.select({ id: groups.id }).from(groups)).map((row) => row.id)
