import { mkdir, mkdtemp, open, readdir, rm, stat, utimes, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { AppError } from '../../../shared/errors/app-error'
import { openFolderStore } from '../../../server/storage/folder-store'
import { describeFileStore } from './file-store-contract'

let folder: string
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'linewright-store-'))
})
afterAll(() => rm(folder, { recursive: true, force: true }))

async function* chunks(count: number, size: number) {
  for (let index = 0; index < count; index += 1) yield Buffer.alloc(size, index)
}

const filesBelow = async (directory: string): Promise<string[]> =>
  (await readdir(directory, { recursive: true, withFileTypes: true }))
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name))

describe('files in a folder', () => {
  describeFileStore(() => openFolderStore({ directory: join(folder, 'contract') }))

  it('keep to themselves: mode 600 in folders of mode 700', async () => {
    const directory = join(folder, 'modes')
    const store = openFolderStore({ directory })
    const { key } = await store.put(chunks(1, 10))
    const mode = await store.withFile(key, async (path) => (await stat(path)).mode & 0o777)
    expect(mode).toBe(0o600)
    expect((await stat(directory)).mode & 0o777).toBe(0o700)
  })

  it('answer a full disk with storage/full and leave nothing', async () => {
    const directory = join(folder, 'full')
    // /dev/full takes no byte: the kernel answers every write as a full disk does.
    const store = openFolderStore({ directory, openTemporary: () => open('/dev/full', 'w') })
    const failure = await store.put(chunks(4, 100_000)).catch((error: unknown) => error)
    expect(failure).toBeInstanceOf(AppError)
    expect(failure).toMatchObject({ code: 'storage/full', status: 507 })
    expect(await store.list()).toEqual([])
    expect(await filesBelow(directory)).toEqual([])
    // With space again, the next one goes through.
    const { byteLength } = await openFolderStore({ directory }).put(chunks(2, 10))
    expect(byteLength).toBe(20)
  })

  it('leave no temporary file of a stream that breaks off', async () => {
    const directory = join(folder, 'broken')
    const store = openFolderStore({ directory })
    const broken = async function* () {
      yield Buffer.alloc(100_000)
      throw new Error('gone')
    }
    await expect(store.put(broken())).rejects.toThrow('gone')
    expect(await filesBelow(directory)).toEqual([])
  })

  it('clear away what a killed process left half written, and nothing younger', async () => {
    const directory = join(folder, 'killed')
    await mkdir(join(directory, '.incoming'), { recursive: true })
    const old = join(directory, '.incoming', 'old')
    const young = join(directory, '.incoming', 'young')
    await writeFile(old, 'half')
    await writeFile(young, 'half')
    const hourAgo = new Date(Date.now() - 60 * 60 * 1000)
    await utimes(old, hourAgo, hourAgo)
    const store = openFolderStore({ directory })
    await store.put(chunks(1, 1))
    expect((await filesBelow(join(directory, '.incoming'))).sort()).toEqual([young])
    expect(await store.list()).toHaveLength(1)
  })

  it('are written piece by piece: 64 MiB pass without being held', async () => {
    const store = openFolderStore({ directory: join(folder, 'large') })
    const before = process.memoryUsage().arrayBuffers
    let most = 0
    const source = async function* () {
      for (let index = 0; index < 1024; index += 1) {
        most = Math.max(most, process.memoryUsage().arrayBuffers - before)
        yield Buffer.alloc(64 * 1024, index)
      }
    }
    const { byteLength } = await store.put(source())
    expect(byteLength).toBe(64 * 1024 * 1024)
    expect(most).toBeLessThan(48 * 1024 * 1024)
  })
})
