import { getDatabase } from '../database/client'
import { findKnownKeys, listGroupIds, removeForgottenFiles } from '../database/repositories/files.repository'
import { withGroup } from '../database/with-group'
import { getFileStore } from '../storage/current'

/** Days after which an upload that nobody made a measurement of is dropped. */
const forgottenDays = 7
/** Bytes get their row within minutes of lying in the store; this old and without one, their process has died. */
const orphanMs = 6 * 60 * 60 * 1000

const dropForgotten = async (groupId: string): Promise<number> => {
  const keys = await withGroup(groupId, (tx) => removeForgottenFiles(tx, groupId, forgottenDays))
  for (const key of keys) await getFileStore().remove(key)
  return keys.length
}

const dropOrphans = async (groupIds: readonly string[]): Promise<number> => {
  const store = getFileStore()
  const old: string[] = []
  for (const key of await store.list()) {
    const found = await store.stat(key)
    if (found !== null && Date.now() - found.modifiedAt.getTime() > orphanMs) old.push(key)
  }
  if (old.length === 0) return 0
  const known = new Set<string>()
  for (const groupId of groupIds)
    for (const key of await withGroup(groupId, (tx) => findKnownKeys(tx, groupId, old))) known.add(key)
  const orphans = old.filter((key) => !known.has(key))
  for (const key of orphans) await store.remove(key)
  return orphans.length
}

/** Tidies the store: uploads that were forgotten, and bytes whose row never came. Any number of processes may do it. */
export const sweepFiles = async (): Promise<{ forgotten: number; orphans: number }> => {
  const groupIds = await listGroupIds(getDatabase())
  let forgotten = 0
  for (const groupId of groupIds) forgotten += await dropForgotten(groupId)
  return { forgotten, orphans: await dropOrphans(groupIds) }
}
