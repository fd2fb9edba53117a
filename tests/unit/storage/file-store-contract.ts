import { createHash, randomBytes } from 'node:crypto'
import { readFile } from 'node:fs/promises'
import { buffer } from 'node:stream/consumers'
import { expect, it } from 'vitest'
import type { FileStore } from '../../../server/storage/file-store'

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex')

async function* pieces(...parts: Uint8Array[]): AsyncGenerator<Uint8Array> {
  for (const part of parts) yield part
}

async function* breaking(after: Uint8Array, error: Error): AsyncGenerator<Uint8Array> {
  yield after
  throw error
}

/** What every backend must do. `open` gives a store that is empty and stays the same between two calls. */
export const describeFileStore = (open: () => FileStore): void => {
  it('gives back what was put, byte for byte', async () => {
    const store = open()
    const parts = [randomBytes(70_000), randomBytes(1), new Uint8Array(0), randomBytes(300_000)]
    const { key, byteLength } = await store.put(pieces(...parts))
    expect(byteLength).toBe(370_001)
    const bytes = await buffer(await store.get(key))
    expect(sha256(bytes)).toBe(sha256(Buffer.concat(parts)))
    expect(await store.withFile(key, async (path) => sha256(await readFile(path)))).toBe(sha256(bytes))
  })

  it('tells length and time of a file, and null of none', async () => {
    const store = open()
    const before = Date.now()
    const { key } = await store.put(pieces(Buffer.from('1;2\n')))
    const found = await store.stat(key)
    expect(found?.byteLength).toBe(4)
    expect(Math.abs((found?.modifiedAt.getTime() ?? 0) - before)).toBeLessThan(60_000)
    await store.remove(key)
    expect(await store.stat(key)).toBeNull()
  })

  it('stores an empty file', async () => {
    const store = open()
    const { key, byteLength } = await store.put(pieces())
    expect(byteLength).toBe(0)
    expect(await buffer(await store.get(key))).toHaveLength(0)
  })

  it('makes a key of its own for every file, also for equal bytes', async () => {
    const store = open()
    const made = await Promise.all(Array.from({ length: 20 }, () => store.put(pieces(Buffer.from('same')))))
    expect(new Set(made.map(({ key }) => key)).size).toBe(20)
    expect((await store.list()).sort()).toEqual(expect.arrayContaining(made.map(({ key }) => key).sort()))
  })

  it('removes a file, also twice, and only that one', async () => {
    const store = open()
    const one = await store.put(pieces(Buffer.from('one')))
    const two = await store.put(pieces(Buffer.from('two')))
    await store.remove(one.key)
    await store.remove(one.key)
    await expect(store.get(one.key)).rejects.toThrow()
    await expect(store.withFile(one.key, async () => true)).rejects.toThrow()
    expect(String(await buffer(await store.get(two.key)))).toBe('two')
    expect(await store.list()).not.toContain(one.key)
  })

  it('leaves nothing of a stream that breaks off', async () => {
    const store = open()
    const before = (await store.list()).sort()
    await expect(store.put(breaking(randomBytes(200_000), new Error('the client went away')))).rejects.toThrow(
      'the client went away',
    )
    expect((await store.list()).sort()).toEqual(before)
  })

  it('never takes a name for a key', async () => {
    const store = open()
    for (const key of [
      '',
      '..',
      '../secret',
      'a/b',
      '/etc/passwd',
      'ab:../../x',
      '.incoming:x',
      'ab:'.padEnd(43, 'z'),
    ]) {
      await expect(store.get(key)).rejects.toThrow(/key made by the store/)
      await expect(store.stat(key)).rejects.toThrow(/key made by the store/)
      await expect(store.remove(key)).rejects.toThrow(/key made by the store/)
    }
  })

  it('writes many files at once', async () => {
    const store = open()
    const contents = Array.from({ length: 16 }, () => randomBytes(50_000))
    const made = await Promise.all(
      contents.map((bytes) => store.put(pieces(bytes.subarray(0, 20_000), bytes.subarray(20_000)))),
    )
    for (const [index, { key }] of made.entries())
      expect(sha256(await buffer(await store.get(key)))).toBe(sha256(contents[index] ?? Buffer.alloc(0)))
  })
}
