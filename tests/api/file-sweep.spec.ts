import { utimes } from 'node:fs/promises'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { closePool } from '../../server/database/client'
import { sweepFiles } from '../../server/services/file-sweep.service'
import { useFileStore } from '../../server/storage/current'
import type { FileStore } from '../../server/storage/file-store'
import { openFolderStore } from '../../server/storage/folder-store'
import { sql } from './support/database'
import { measurementBody, smallTable, upload } from './support/files'
import { buildWorld, type World } from './support/people'

let world: World
let store: FileStore

beforeAll(async () => {
  world = await buildWorld()
  process.env.DATABASE_URL = inject('databaseUrl')
  store = openFolderStore({ directory: inject('storageDir') })
  useFileStore(store)
})
afterAll(closePool)

async function* bytes() {
  yield Buffer.from('1;2\n')
}

const age = async (key: string, hours: number) => {
  const then = new Date(Date.now() - hours * 60 * 60 * 1000)
  await utimes(join(inject('storageDir'), ...key.split(':')), then, then)
}

const keyOf = async (fileId: string): Promise<string> => {
  const [row] = await sql<{ key: string }>(
    'select storage_key as key from files where id = $1',
    [fileId],
    world.groupId,
  )
  return row?.key ?? ''
}

const makeOld = (fileId: string, days: number) =>
  sql('update files set created_at = now() - make_interval(days => $2) where id = $1', [fileId, days], world.groupId)

describe('tidying the store', () => {
  it('drops bytes whose row never came, once nobody can be writing them', async () => {
    const old = (await store.put(bytes())).key
    const young = (await store.put(bytes())).key
    await age(old, 7)
    await age(young, 5)
    expect((await sweepFiles()).orphans).toBe(1)
    expect(await store.stat(old)).toBeNull()
    expect(await store.stat(young)).not.toBeNull()
    await store.remove(young)
  })

  it('keeps every file that has a row, in whatever group, however old it is', async () => {
    const own = (await upload(world.people.owner.client, world.groupId, smallTable)).json.id
    const foreign = await upload(world.people.outsider.client, world.otherGroupId, smallTable)
    await age(await keyOf(own), 100)
    for (const key of await store.list()) await age(key, 50)
    await sweepFiles()
    const path = (group: string, id: string) => `/api/groups/${group}/files/${id}/content`
    expect((await world.people.owner.client.get(path(world.groupId, own))).status).toBe(200)
    expect((await world.people.outsider.client.get(path(world.otherGroupId, foreign.json.id))).status).toBe(200)
  })

  it('drops uploads of a week ago that no measurement was made of, and no others', async () => {
    const client = world.people.owner.client
    const [forgotten, used, recent] = await Promise.all(
      Array.from({ length: 3 }, async () => (await upload(client, world.groupId, smallTable)).json.id as string),
    )
    const made = await client.post(`/api/groups/${world.groupId}/measurements`, measurementBody(used ?? ''))
    expect(made.status).toBe(201)
    const key = await keyOf(forgotten ?? '')
    await makeOld(forgotten ?? '', 8)
    await makeOld(used ?? '', 8)
    await makeOld(recent ?? '', 6)
    expect((await sweepFiles()).forgotten).toBeGreaterThanOrEqual(1)
    const status = async (id = '') => (await client.get(`/api/groups/${world.groupId}/files/${id}/content`)).status
    expect(await status(forgotten)).toBe(404)
    expect(await store.stat(key)).toBeNull()
    expect(await status(used)).toBe(200)
    expect(await status(recent)).toBe(200)
  })
})
