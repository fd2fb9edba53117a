import { beforeAll, describe, expect, inject, it } from 'vitest'
import { policy } from './policy'
import { hashOfAllRows } from './support/database'
import { makers, randomIds, type ObjectIds } from './support/objects'
import { buildWorld, type World } from './support/people'
import { listRouteFiles, pathOf, toRoute } from './support/routes'

let world: World
let ids: ObjectIds

const writes = listRouteFiles()
  .map(toRoute)
  .filter(({ method, file }) => method !== 'GET' && policy[file])

const baseUrl = inject('baseUrl')

/** What the pages of other sites, old browsers and programs send. */
const foreignHeaders: Record<string, Record<string, string>> = {
  'another site': { 'sec-fetch-site': 'cross-site', origin: 'https://elsewhere.example' },
  'a neighbouring site': { 'sec-fetch-site': 'same-site', origin: 'http://other.127.0.0.1' },
  'an address bar': { 'sec-fetch-site': 'none' },
  'no header at all': {},
  'an opaque origin': { origin: 'null' },
  'our host on another port': { origin: 'http://127.0.0.1:1' },
  'our host under another scheme': { origin: baseUrl.replace('http:', 'https:') },
  'an origin that begins like ours': { origin: `${baseUrl}.elsewhere.example` },
  'another site that claims our origin': { 'sec-fetch-site': 'cross-site', origin: baseUrl },
}

const foreignTypes: Record<string, { contentType?: string; body: string }> = {
  form: { contentType: 'application/x-www-form-urlencoded', body: 'name=x' },
  'text/plain': { contentType: 'text/plain', body: '{"name":"x"}' },
  'no content type': { body: '{"name":"x"}' },
  'octet-stream': { contentType: 'application/octet-stream', body: '{"name":"x"}' },
  'something that begins like JSON': { contentType: 'application/json-patch+json', body: '{"name":"x"}' },
  multipart: { contentType: 'multipart/form-data; boundary=x', body: '--x\r\n\r\n{"name":"x"}\r\n--x--\r\n' },
}

beforeAll(async () => {
  world = await buildWorld()
  ids = randomIds(world.groupId)
  for (const make of Object.values(makers)) {
    Object.assign(ids, await make({ groupId: world.groupId, owner: world.people.owner }))
  }
})

const unchanged = async (work: () => Promise<void>) => {
  const groups = [world.groupId, world.otherGroupId]
  const before = await hashOfAllRows(groups)
  await work()
  expect(await hashOfAllRows(groups)).toBe(before)
}

describe.each(writes)('$method $pattern', (route) => {
  const entry = policy[route.file]
  if (!entry) return
  const path = () => pathOf(route, entry, ids)
  // An upload takes multipart on purpose; its own spec covers what stands in it.
  const takesRaw = entry.raw !== undefined

  it('is refused from anywhere but our own pages, and changes nothing', async () => {
    await unchanged(async () => {
      for (const [from, headers] of Object.entries(foreignHeaders)) {
        const sent = takesRaw ? entry.raw?.() : { json: entry.body?.(ids) }
        const answer = await world.people.owner.client.send(path(), { method: route.method, headers, ...sent })
        expect([from, answer.status, answer.json?.code]).toEqual([from, 403, 'request/cross-site'])
      }
    })
  })

  it('takes its own content type only, and changes nothing otherwise', async () => {
    await unchanged(async () => {
      for (const [what, { contentType, body }] of Object.entries(foreignTypes)) {
        if (takesRaw && what === 'multipart') continue
        const answer = await world.people.owner.client.send(path(), { method: route.method, contentType, body })
        expect([what, answer.status, answer.json?.code]).toEqual([what, 415, 'input/media-type'])
      }
    })
  })
})

describe('the addresses of our own pages', () => {
  it('are told by the browser, or by an origin that is exactly ours', async () => {
    const port = new URL(baseUrl).port
    const good: Record<string, string>[] = [
      { 'sec-fetch-site': 'same-origin' },
      { origin: `http://127.0.0.1:${port}` },
      { origin: `http://localhost:${port}` },
    ]
    for (const headers of good) {
      const answer = await world.people.owner.client.post('/api/groups', { name: 'From our own page' }, { headers })
      expect(answer.status, JSON.stringify(headers)).toBe(201)
    }
  })
})

describe('reading', () => {
  it('changes nothing', async () => {
    await unchanged(async () => {
      for (const route of listRouteFiles().map(toRoute)) {
        const entry = policy[route.file]
        if (route.method !== 'GET' || !entry || entry.stream) continue
        const answer = await world.people.owner.client.get(pathOf(route, entry, ids))
        expect([route.pattern, answer.status < 500]).toEqual([route.pattern, true])
      }
    })
  })
})
