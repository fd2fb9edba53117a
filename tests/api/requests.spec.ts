import { connect } from 'node:net'
import { beforeAll, describe, expect, it } from 'vitest'
import { policy } from './policy'
import { Client } from './support/client'
import { hashOfAllRows } from './support/database'
import { findLogLine } from './support/log'
import { makers, randomIds, smallSet, type ObjectIds } from './support/objects'
import { buildWorld, type World } from './support/people'
import { listRouteFiles, pathOf, toRoute } from './support/routes'

let world: World
let ids: ObjectIds
const routes = listRouteFiles()
  .map(toRoute)
  .filter(({ file }) => policy[file])

beforeAll(async () => {
  world = await buildWorld()
  ids = randomIds(world.groupId)
  for (const make of Object.values(makers)) {
    Object.assign(ids, await make({ groupId: world.groupId, owner: world.people.owner }))
  }
})

const setsPath = () => `/api/groups/${world.groupId}/sets`

describe('bodies', () => {
  it.each([
    ['an empty body', '', 400],
    ['half an object', '{"name":', 400],
    ['NaN', '{"name": NaN}', 400],
    ['single quotes', "{'name': 'x'}", 400],
    ['bytes that are not UTF-8', Buffer.from([0x7b, 0x22, 0xff, 0xfe, 0x22, 0x7d]), 400],
    ['__proto__', '{"name":"x","__proto__":{"role":"owner"}}', 400],
    ['__proto__ in escapes', '{"name":"x","\\u005f_proto__":{"role":"owner"}}', 400],
    ['constructor.prototype', '{"name":"x","constructor":{"prototype":{"role":"owner"}}}', 400],
    ['a list', '["name"]', 422],
    ['a bare word', '"name"', 422],
    ['null', 'null', 422],
    ['an unknown key', '{"name":"x","role":"owner"}', 422],
    ['NUL in a text', '{"name":"a\\u0000b"}', 422],
    ['half a surrogate pair', '{"name":"a\\ud800b"}', 422],
    ['a control character', '{"name":"a\\u001bb"}', 422],
    ['a text that turns the writing direction', '{"name":"a\\u202eb"}', 422],
  ])('with %s are refused', async (_what, body, status) => {
    const answer = await world.people.owner.client.send('/api/groups', {
      method: 'POST',
      body,
      contentType: 'application/json',
    })
    expect([answer.status, answer.headers.get('content-type')]).toEqual([status, 'application/problem+json'])
    expect(answer.json.code).toBe(status === 400 ? 'input/malformed' : 'input/invalid')
    expect(({} as { role?: string }).role).toBeUndefined()
  })

  it('name the place of every wrong value, and the keys nobody knows', async () => {
    const parameters = { ...smallSet(), temperaturesK: [-1, '4'], colour: 'red' }
    const answer = await world.people.owner.client.post(setsPath(), { name: 'x', parameters })
    expect(answer.status).toBe(422)
    const paths = answer.json.issues.map((issue: { path: unknown }) => JSON.stringify(issue.path))
    expect(paths).toContain('["parameters","temperaturesK",0]')
    expect(paths).toContain('["parameters","temperaturesK",1]')
    expect(paths).toContain('["parameters","colour"]')
  })

  it('with an infinite number are refused where it stands', async () => {
    const body = `{"name":"x","parameters":${JSON.stringify(smallSet()).replace('2000', '1e999')}}`
    const answer = await world.people.owner.client.send(setsPath(), {
      method: 'POST',
      body,
      contentType: 'application/json',
    })
    expect([answer.status, answer.json.issues[0].path]).toEqual([422, ['parameters', 'zeroPhononEnergyMeV']])
  })

  it('take a charset, whatever its letters', async () => {
    const sent = { contentType: 'Application/JSON; charset=utf-8', body: '{"name":"With charset"}' }
    expect((await world.people.owner.client.send('/api/groups', { method: 'POST', ...sent })).status).toBe(201)
  })

  it('larger than a mebibyte are refused, announced or not', async () => {
    const { client } = world.people.owner
    const body = JSON.stringify({ name: 'x'.repeat(1024 * 1024) })
    const announced = await client.send('/api/groups', { method: 'POST', body, contentType: 'application/json' })
    expect([announced.status, announced.json.code]).toEqual([413, 'input/too-large'])
    const answer = await sendChunks(client, '/api/groups', 64 * 1024, 10_000)
    expect(answer.head).toMatch(/^HTTP\/1.1 413 /)
    // What the server took in before it hung up: the limit and what was on its way.
    expect(answer.bytesSent).toBeLessThan(32 * 1024 * 1024)
  })

  it('of strangers are refused before they arrive', async () => {
    const answer = await sendChunks(new Client(), '/api/groups', 64 * 1024, 10_000)
    expect(answer.head).toMatch(/^HTTP\/1.1 401 /)
    expect(answer.bytesSent).toBeLessThan(32 * 1024 * 1024)
  })
})

/** Writes a chunked body until the server hangs up; answers the head of its answer and how much went out. */
const sendChunks = (client: Client, path: string, size: number, count: number) =>
  new Promise<{ head: string; bytesSent: number }>((done) => {
    const { hostname, port } = new URL(client.baseUrl)
    const socket = connect(Number(port), hostname)
    const cookie = [...client.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
    let head = ''
    let sent = 0
    socket.on('data', (data) => (head += data.toString('latin1')))
    socket.on('error', () => undefined)
    socket.on('close', () => done({ head, bytesSent: sent * size }))
    socket.write(
      `POST ${path} HTTP/1.1\r\nhost: x\r\nsec-fetch-site: same-origin\r\ncontent-type: application/json\r\ncookie: ${cookie}\r\ntransfer-encoding: chunked\r\n\r\n`,
    )
    const chunk = `${size.toString(16)}\r\n${' '.repeat(size)}\r\n`
    const write = () => {
      while (sent < count && !socket.destroyed && head === '') {
        sent++
        if (!socket.write(chunk)) {
          socket.once('drain', write)
          return
        }
      }
    }
    write()
  })

describe('methods', () => {
  it('that an address has no file for are named', async () => {
    const { client } = world.people.owner
    const cases: [string, string, string][] = [
      ['PUT', '/api/session', 'DELETE, GET, POST'],
      ['HEAD', '/api/session', 'DELETE, GET, POST'],
      ['OPTIONS', '/api/groups', 'GET, POST'],
      ['TRACE', '/api/groups', 'GET, POST'],
      ['POST', '/', 'GET, HEAD'],
      ['DELETE', '/sign-in', 'GET, HEAD'],
      ['PATCH', '/_nuxt/nothing.js', 'GET, HEAD'],
    ]
    for (const [method, path, allow] of cases) {
      const answer = await client.send(path, { method })
      expect([method, path, answer.status, answer.headers.get('allow')]).toEqual([method, path, 405, allow])
    }
  })

  it('do not matter where there is nothing', async () => {
    for (const path of [
      '/api',
      '/api/',
      '/api/nothing',
      '/api/groups/x/y/z',
      '/api/openapi.json',
      '/_nuxt/nothing.js',
    ]) {
      const answer = await world.people.owner.client.get(path)
      if (path === '/api') expect(answer.headers.get('content-type')).toMatch(/^text\/html/)
      else expect([path, answer.status, answer.json?.code]).toEqual([path, 404, 'request/not-found'])
    }
  })
})

/** The same address in the ways that prefixes and routers disagree about. */
const spellings: Record<string, (path: string) => string> = {
  'capital letters': (path) => path.replace('/api/', '/API/'),
  'a capital letter inside': (path) =>
    path.replace(/\/([a-z])([a-z]+)$/, (_all, first: string, rest: string) => `/${first.toUpperCase()}${rest}`),
  'a slash at the end': (path) => `${path}/`,
  'two slashes': (path) => path.replace('/api/', '/api//'),
  'two slashes in front': (path) => `/${path}`,
  'a dot': (path) => path.replace('/api/', '/api/./'),
  'an encoded dot': (path) => path.replace('/api/', '/api/%2e/'),
  'an encoded slash': (path) => path.replace('/api/', '/api%2F'),
  'a slash encoded twice': (path) => path.replace('/api/', '/api%252F'),
  'an encoded letter': (path) => path.replace('/api/', '/%61pi/'),
  'a parameter of the path': (path) => `${path};x=1`,
  'a query': (path) => `${path}?x=1`,
  'a backslash': (path) => path.replace('/api/', '/api\\'),
  'an encoded NUL': (path) => `${path}%00`,
  'a broken escape': (path) => `${path}%`,
}

describe.each(Object.entries(spellings))('an address written with %s', (_name, spell) => {
  it('opens nothing that the plain one does not', async () => {
    const before = await hashOfAllRows([world.groupId])
    for (const route of routes) {
      const entry = policy[route.file]
      if (!entry || entry.access === 'public') continue
      for (const client of [new Client(), world.people.outsider.client]) {
        if (client === world.people.outsider.client && entry.access === 'account') continue
        const sent = entry.raw ? entry.raw() : { json: entry.body?.(ids) }
        const answer = await client.send(spell(pathOf(route, entry, ids)), { method: route.method, ...sent })
        // The shell of the pages holds no data; everything else must be refused.
        const isShell = (answer.headers.get('content-type') ?? '').startsWith('text/html')
        expect([route.pattern, isShell || answer.status >= 400, answer.status < 500]).toEqual([
          route.pattern,
          true,
          true,
        ])
        expect(answer.text).not.toContain(world.people.owner.name)
      }
    }
    expect(await hashOfAllRows([world.groupId])).toBe(before)
  })
})

describe('answers', () => {
  it('to anything wrong name the request that the log names', async () => {
    const answer = await world.people.owner.client.get('/api/groups/nothing')
    expect(answer.json.requestId).toBe(answer.headers.get('x-request-id'))
    const line = await findLogLine(answer.json.requestId)
    expect(JSON.parse(line)).toMatchObject({ event: 'request.refused', status: 404, code: 'request/not-found' })
  })

  it('do not take the id of a request from outside', async () => {
    const forged = 'forged-id\r\nforged'
    const answer = await new Client().get('/api/nothing', { headers: { 'x-request-id': encodeURIComponent(forged) } })
    expect(answer.text).not.toContain('forged')
  })
})
