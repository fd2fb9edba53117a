import { createHash } from 'node:crypto'
import type { Readable } from 'node:stream'
import { AppError } from '../../shared/errors/app-error'
import type { ReadingRequest } from '../../shared/schemas/measurement'
import { isReferenceViolation } from '../database/postgres-errors'
import {
  createFile,
  findFile,
  lockFileRoom,
  measureFileRoom,
  removeFile,
  type FileRow,
} from '../database/repositories/files.repository'
import { withGroup } from '../database/with-group'
import { getFileStore } from '../storage/current'
import { requireMembership } from './access.service'
import { assertFileRoom, enterUpload } from './file-room'
import { proposeCorrected, proposeReading } from './table-reader.service'

/** Bytes that lie in the store and have no row yet. */
export interface KeptBytes {
  storageKey: string
  byteLength: number
  sha256: string
}

/** Everything that can be refused before a byte of the body is read. The returned function ends the upload's turn. */
export const beginUpload = async (groupId: string, userId: string, announcedBytes: number): Promise<() => void> => {
  const leave = enterUpload(userId)
  try {
    assertFileRoom(await withGroup(groupId, (tx) => measureFileRoom(tx, groupId)), announcedBytes)
    return leave
  } catch (error) {
    leave()
    throw error
  }
}

async function* hashed(source: Readable, hash: { update: (chunk: Buffer) => unknown }): AsyncGenerator<Buffer> {
  for await (const chunk of source as AsyncIterable<Buffer>) {
    hash.update(chunk)
    yield chunk
  }
}

/** Streams bytes into the store and hashes them on the way. */
export const keepBytes = async (source: Readable): Promise<KeptBytes> => {
  const hash = createHash('sha256')
  const { key, byteLength } = await getFileStore().put(hashed(source, hash))
  return { storageKey: key, byteLength, sha256: hash.digest('hex') }
}

export const dropBytes = (kept: KeptBytes): Promise<void> => getFileStore().remove(kept.storageKey)

/**
 * Makes a file of kept bytes: reads them as a table first, so that nothing unreadable is stored, and counts the room
 * again under a lock, because other uploads may have ended meanwhile. On any refusal the bytes are gone.
 */
export const addFile = async (groupId: string, userId: string, name: string, kept: KeptBytes) => {
  try {
    const proposal = await proposeReading(kept)
    // An upload takes its time; whoever was removed from the group during it adds nothing.
    await requireMembership(groupId, userId, 'editor')
    const file = await withGroup(groupId, async (tx) => {
      await lockFileRoom(tx, groupId)
      assertFileRoom(await measureFileRoom(tx, groupId), kept.byteLength)
      return createFile(tx, groupId, { ...kept, name, createdBy: userId })
    })
    return { file, proposal }
  } catch (error) {
    await dropBytes(kept)
    throw error
  }
}

export const getFile = async (groupId: string, fileId: string): Promise<FileRow> => {
  const file = await withGroup(groupId, (tx) => findFile(tx, groupId, fileId))
  if (!file) throw new AppError('request/not-found')
  return file
}

export const readFileAgain = async (groupId: string, fileId: string, { reading, answered }: ReadingRequest) => {
  const file = await getFile(groupId, fileId)
  return { file, proposal: await proposeCorrected(file, reading, answered) }
}

export const openFile = async (groupId: string, fileId: string) => {
  const file = await getFile(groupId, fileId)
  return { file, stream: await getFileStore().get(file.storageKey) }
}

export const removeGroupFile = async (groupId: string, fileId: string): Promise<void> => {
  let storageKey: string | null
  try {
    storageKey = await withGroup(groupId, (tx) => removeFile(tx, groupId, fileId))
  } catch (error) {
    if (!isReferenceViolation(error)) throw error
    throw new AppError('object/in-use', { detail: 'A measurement was read from this file, so it stays.' })
  }
  if (storageKey === null) throw new AppError('request/not-found')
  await getFileStore().remove(storageKey)
}
