import { readdirSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { expect, inject } from 'vitest'
import { sql } from './database'

/** Files in the store, and those that are being written. */
export const storedFiles = (): string[] =>
  readdirSync(inject('storageDir'), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name))
    .sort()

const countRows = async (groupId: string): Promise<number> => {
  const [row] = await sql<{ count: number }>('select count(*)::int as count from files', [], groupId)
  return row?.count ?? -1
}

/** Runs something that must leave neither bytes nor rows behind. */
export const leavingNothing = async <T>(groupId: string, work: () => Promise<T>): Promise<T> => {
  const before = storedFiles()
  const rows = await countRows(groupId)
  const result = await work()
  // An aborted request is tidied up after its socket is gone.
  for (let tries = 0; tries < 50 && storedFiles().length !== before.length; tries += 1) await pause(100)
  expect(storedFiles()).toEqual(before)
  expect(await countRows(groupId)).toBe(rows)
  return result
}
