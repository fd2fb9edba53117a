import { randomBytes } from 'node:crypto'
import { createReadStream } from 'node:fs'
import { mkdir, open, readdir, rename, rm, stat, type FileHandle } from 'node:fs/promises'
import { join, resolve } from 'node:path'
import { createStorage } from 'unstorage'
import folderDriver from 'unstorage/drivers/fs-lite'
import { AppError } from '../../shared/errors/app-error'
import type { FileStore } from './file-store'

/**
 * Files in a folder. unstorage lists, describes and removes them; it is not asked to write or read them, because its
 * drivers take and return whole values: eight uploads of 64 MiB would need 512 MiB, and a value half written when the
 * disk fills up would stay under its final key. So bytes go through a temporary file in the same folder, are flushed,
 * and get their key by a rename, which is atomic: a key either holds the whole file or does not exist.
 *
 *     <directory>/.incoming/<random>   being written
 *     <directory>/ab/ab3f...           stored, key `ab:ab3f...`
 */

const incoming = '.incoming'
const keyPattern = /^[0-9a-f]{2}:[0-9a-f]{40}$/
/** A web server ends any request after five minutes, so nothing this old is still being written. */
const staleMs = 30 * 60 * 1000
const noSpace = new Set(['ENOSPC', 'EDQUOT', 'EFBIG'])

const codeOf = (error: unknown) => (error instanceof Error && 'code' in error ? String(error.code) : '')

export interface FolderStoreOptions {
  directory: string
  /** Opens a new temporary file; replaced in tests of full disks. */
  openTemporary?: (path: string) => Promise<FileHandle>
}

const writeAll = async (file: FileHandle, source: AsyncIterable<Uint8Array>): Promise<number> => {
  let byteLength = 0
  for await (const chunk of source) {
    for (let offset = 0; offset < chunk.length;) {
      const { bytesWritten } = await file.write(chunk, offset)
      offset += bytesWritten
    }
    byteLength += chunk.length
  }
  // Space may only be claimed when the data reaches the disk; the row that names the file comes after this.
  await file.sync()
  return byteLength
}

const removeStale = async (folder: string): Promise<void> => {
  for (const name of await readdir(folder)) {
    const path = join(folder, name)
    const found = await stat(path).catch(() => null)
    if (found !== null && Date.now() - found.mtimeMs > staleMs) await rm(path, { force: true })
  }
}

export const openFolderStore = ({
  directory,
  openTemporary = (path) => open(path, 'wx', 0o600),
}: FolderStoreOptions): FileStore => {
  const root = resolve(directory)
  const index = createStorage({ driver: folderDriver({ base: root, ignore: (name) => name.endsWith(incoming) }) })
  let ready: Promise<void> | undefined

  const prepare = (): Promise<void> =>
    (ready ??= mkdir(join(root, incoming), { recursive: true, mode: 0o700 })
      .then(() => removeStale(join(root, incoming)))
      .catch((error: unknown) => {
        ready = undefined
        throw error
      }))

  const pathOf = (key: string): string => {
    if (!keyPattern.test(key)) throw new Error(`expected a key made by the store; found ${JSON.stringify(key)}`)
    return join(root, ...key.split(':'))
  }

  const place = async (temporary: string): Promise<string> => {
    const id = randomBytes(20).toString('hex')
    const key = `${id.slice(0, 2)}:${id}`
    await mkdir(join(root, id.slice(0, 2)), { recursive: true, mode: 0o700 })
    await rename(temporary, pathOf(key))
    return key
  }

  return {
    async put(source) {
      await prepare()
      const temporary = join(root, incoming, randomBytes(16).toString('hex'))
      try {
        const file = await openTemporary(temporary)
        let byteLength: number
        try {
          byteLength = await writeAll(file, source)
        } finally {
          await file.close()
        }
        return { key: await place(temporary), byteLength }
      } catch (error) {
        await rm(temporary, { force: true })
        throw noSpace.has(codeOf(error)) ? new AppError('storage/full', { cause: error }) : error
      }
    },

    async get(key) {
      const file = await open(pathOf(key), 'r')
      return createReadStream('', { fd: file })
    },

    async withFile(key, use) {
      const path = pathOf(key)
      await stat(path)
      return use(path)
    },

    async stat(key) {
      pathOf(key)
      const { size, mtime } = await index.getMeta(key, { nativeOnly: true })
      if (typeof size !== 'number' || !(mtime instanceof Date)) return null
      return { byteLength: size, modifiedAt: mtime }
    },

    async remove(key) {
      const path = pathOf(key)
      await index.removeItem(key)
      // The driver swallows every error of unlink; a file that is still there must not pass as removed.
      if (await index.hasItem(key)) throw new Error(`expected ${path} to be removed; it is still there`)
    },

    async list() {
      const keys = await index.getKeys()
      return keys.filter((key) => keyPattern.test(key))
    },
  }
}
