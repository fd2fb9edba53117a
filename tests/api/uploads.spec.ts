import { readFileSync } from 'node:fs'
import { setTimeout as pause } from 'node:timers/promises'
import { beforeAll, describe, expect, inject, it } from 'vitest'
import { limits } from '../../shared/utils/limits'
import { Client } from './support/client'
import { sql } from './support/database'
import { boundary, form, smallTable, upload } from './support/files'
import { addMember, buildWorld, createGroup, register, removeMember, type World } from './support/people'
import { headOf, openSocket, sendPieces } from './support/raw'
import { leavingNothing } from './support/store'

let world: World
let groupId: string
beforeAll(async () => {
  world = await buildWorld()
  groupId = world.groupId
})

const owner = () => world.people.owner.client
const filesPath = () => `/api/groups/${groupId}/files`

/** Resident memory of the server, MiB; its process id stands in every line of its log. */
const memoryOfServer = (): number => {
  const pid = /"pid":(\d+)/.exec(readFileSync(inject('logFile'), 'utf8'))?.[1]
  const kilobytes = /VmRSS:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1]
  return Math.round(Number(kilobytes) / 1024)
}

describe('uploads that are too large', () => {
  const head = Buffer.from(`--${boundary}\r\ncontent-disposition: form-data; name="file"; filename="a.csv"\r\n\r\n`)
  const tail = Buffer.from(`\r\n--${boundary}--\r\n`)
  const piece = Buffer.alloc(64 * 1024, '1;2\n')
  function* content(bytes: number) {
    yield head
    for (let left = bytes; left > 0; left -= piece.length) yield piece.subarray(0, Math.min(left, piece.length))
    yield tail
  }
  function* chunked(pieces: Iterable<Buffer>) {
    for (const bytes of pieces)
      yield Buffer.concat([Buffer.from(`${bytes.length.toString(16)}\r\n`), bytes, Buffer.from('\r\n')])
    yield Buffer.from('0\r\n\r\n')
  }
  const lengthOf = (bytes: number) => ({ 'content-length': String(head.length + bytes + tail.length) })

  it('64 MiB + 1 byte are refused while they stream in, and the connection is closed', async () => {
    const bytes = limits.uploadBytes + 1
    // The end of the form never comes: whoever waited for it would wait in vain.
    const withoutEnd = [...content(bytes)].slice(0, -1)
    const answer = await leavingNothing(groupId, () => sendPieces(owner(), filesPath(), lengthOf(bytes), withoutEnd))
    expect(answer.status, answer.text.slice(0, 300)).toBe(413)
    expect(answer.text).toMatch(/input\/too-large/)
    expect(answer.text).toMatch(/67108864 bytes/)
    expect(answer.text).toMatch(/connection: close/i)
    expect(answer.closed).toBe(true)
  })

  it('64 MiB exactly are taken, and refused only because they are no spectrum', async () => {
    const bytes = limits.uploadBytes
    const answer = await leavingNothing(groupId, () =>
      sendPieces(owner(), filesPath(), lengthOf(bytes), content(bytes)),
    )
    expect(answer.status, answer.text.slice(0, 300)).toBe(422)
    expect(answer.text).toMatch(/measurement\/unreadable/)
  })

  it('a length that says too much is refused before anything is read', async () => {
    const bytes = 2 * limits.uploadBytes
    const answer = await leavingNothing(groupId, () =>
      sendPieces(owner(), filesPath(), lengthOf(bytes), content(bytes)),
    )
    expect(answer.status).toBe(413)
    expect(answer.sentBytes).toBeLessThan(16 * 1024 * 1024)
  })

  it('2 GiB without a length are cut at the limit', async () => {
    const answer = await leavingNothing(groupId, () =>
      sendPieces(owner(), filesPath(), { 'transfer-encoding': 'chunked' }, chunked(content(2 ** 31))),
    )
    expect(answer.status, answer.text.slice(0, 300)).toBe(413)
    expect(answer.sentBytes).toBeLessThan(limits.uploadBytes + 32 * 1024 * 1024)
    expect(answer.closed).toBe(true)
  })

  it.each([
    ['signed out', () => new Client(), 401],
    ['a viewer', () => world.people.viewer.client, 403],
    ['someone outside', () => world.people.outsider.client, 404],
  ])('%s is refused before the body is read', async (_who, client, status) => {
    const bytes = limits.uploadBytes
    const answer = await leavingNothing(groupId, () =>
      sendPieces(client(), filesPath(), lengthOf(bytes), content(bytes)),
    )
    expect(answer.status).toBe(status)
    // What lies in the buffers of two sockets is sent; the server itself takes none of it.
    expect(answer.sentBytes).toBeLessThan(16 * 1024 * 1024)
    expect(answer.closed).toBe(true)
  })

  it('eight at once keep the memory of the server bounded and its answers quick', async () => {
    // One upload first, so that the thread that reads tables is there already.
    await upload(owner(), groupId, '1;2\n'.repeat(30_000))
    const before = memoryOfServer()
    let [slowest, most, finished] = [0, 0, false]
    const watch = (async () => {
      while (!finished) {
        const started = performance.now()
        expect((await owner().get('/api/health/live')).status).toBe(200)
        slowest = Math.max(slowest, performance.now() - started)
        most = Math.max(most, memoryOfServer() - before)
        await pause(20)
      }
    })()
    const bytes = limits.uploadBytes
    const answers = await leavingNothing(groupId, () =>
      Promise.all(Array.from({ length: 8 }, () => sendPieces(owner(), filesPath(), lengthOf(bytes), content(bytes)))),
    )
    finished = true
    await watch
    expect(answers.map(({ status }) => status)).toEqual(Array.from({ length: 8 }, () => 422))
    console.log(`eight uploads: memory +${most} MiB, slowest answer ${Math.round(slowest)} ms`)
    expect(most).toBeLessThanOrEqual(150)
    // A guard against hanging only; time is judged where nothing else runs.
    expect(slowest).toBeLessThan(5000)
  })
})

describe('uploads that break off', () => {
  it.each([0.1, 0.5, 0.99])('at %d of the file leave nothing', async (share) => {
    await leavingNothing(groupId, async () => {
      const body = form(Buffer.alloc(4 * 1024 * 1024, '1;2\n'))
      const socket = await openSocket(owner())
      socket.on('error', () => undefined)
      socket.write(headOf(owner(), filesPath(), { 'content-length': String(body.length) }))
      await new Promise<void>((done) => socket.write(body.subarray(0, Math.floor(body.length * share)), () => done()))
      await pause(300)
      socket.destroy()
    })
    expect((await owner().get('/api/health/live')).status).toBe(200)
  })

  it('by a person who is removed from the group meanwhile add nothing', async () => {
    const person = await register('Leaving Editor')
    await addMember(groupId, person, 'editor')
    const body = form(smallTable)
    const answer = await leavingNothing(groupId, async () => {
      const socket = await openSocket(person.client)
      let text = ''
      socket.on('data', (chunk: Buffer) => (text += chunk.toString('latin1')))
      socket.write(headOf(person.client, filesPath(), { 'content-length': String(body.length) }))
      socket.write(body.subarray(0, 400))
      await pause(300)
      await removeMember(groupId, person)
      socket.write(body.subarray(400))
      for (let tries = 0; tries < 100 && text === ''; tries += 1) await pause(50)
      socket.destroy()
      return text
    })
    expect(answer).toMatch(/^HTTP\/1\.1 404/)
  })
})

describe('room for files', () => {
  it('is counted for each group, also when uploads end at the same moment', async () => {
    const person = world.people.owner
    const full = await createGroup(person, 'Full group')
    // All rows but the last two that the limit allows, written where the server counts.
    await sql(
      `insert into files (group_id, storage_key, name, byte_length, sha256, created_by)
       select $1, 'none:' || gen_random_uuid(), 'x', 1, 'x', $2 from generate_series(1, $3)`,
      [full, person.id, limits.groupFiles - 2],
      full,
    )
    const answers = await Promise.all(Array.from({ length: 6 }, () => upload(person.client, full, smallTable)))
    const statuses = answers.map(({ status }) => status).sort()
    expect(statuses).toEqual([201, 201, 409, 409, 409, 409])
    const refused = answers.find(({ status }) => status === 409)
    expect(refused?.json.code).toBe('quota/exceeded')
    expect(refused?.json.detail).toMatch(/at most 5000 files/)
    const [row] = await sql<{ count: number }>('select count(*)::int as count from files', [], full)
    expect(row?.count).toBe(limits.groupFiles)
  })

  it('is counted in bytes as well', async () => {
    const person = world.people.owner
    const full = await createGroup(person, 'Heavy group')
    await sql(
      `insert into files (group_id, storage_key, name, byte_length, sha256, created_by)
       select $1, 'none:' || gen_random_uuid(), 'x', 2147483647, 'x', $2 from generate_series(1, 4)`,
      [full, person.id],
      full,
    )
    const answer = await upload(person.client, full, smallTable)
    expect(answer.status).toBe(409)
    expect(answer.json.detail).toMatch(/at most 8 GiB; 8 GiB are in use/)
  })

  it('keeps one person from running more than eight uploads at once', async () => {
    const person = await register('Busy Editor')
    await addMember(groupId, person, 'editor')
    const body = form(smallTable)
    const sockets = await Promise.all(Array.from({ length: limits.uploadsAtOnce }, () => openSocket(person.client)))
    for (const socket of sockets) {
      socket.on('error', () => undefined)
      socket.write(headOf(person.client, filesPath(), { 'content-length': String(body.length) }))
      socket.write(body.subarray(0, 100))
    }
    await pause(1000)
    const answer = await upload(person.client, groupId, smallTable)
    expect(answer.status).toBe(409)
    expect(answer.json.detail).toMatch(/at most 8 uploads running/)
    for (const socket of sockets) socket.destroy()
    for (let tries = 0; tries < 50; tries += 1) {
      if ((await upload(person.client, groupId, smallTable)).status === 201) return
      await pause(200)
    }
    throw new Error('expected the places of broken uploads to be free again')
  })
})
