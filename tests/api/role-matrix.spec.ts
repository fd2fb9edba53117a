import { beforeAll, describe, expect, it } from 'vitest'
import { isAtLeast, roles, type Role } from '../../shared/schemas/roles'
import { policy, type RoutePolicy } from './policy'
import type { Answer, Client } from './support/client'
import { makers, randomIds, type ObjectIds } from './support/objects'
import { buildWorld, callers, register, type Caller, type Person, type World } from './support/people'
import { listBuiltRoutes, listRouteFiles, pathOf, toRoute, type Route } from './support/routes'
import { readHead } from './support/stream'

let world: World

const isRole = (access: RoutePolicy['access']): access is Role => roles.some((role) => role === access)

const send = async (client: Client, route: Route, entry: RoutePolicy, ids: ObjectIds): Promise<Answer> => {
  const path = pathOf(route, entry, ids)
  if (entry.stream) return readHead(client, path)
  if (entry.raw) return client.send(path, { method: route.method, ...entry.raw() })
  return client.send(path, { method: route.method, json: entry.body?.(ids) })
}

/** Fresh objects in a group, as its owner makes them. */
const makeObjects = async (entry: RoutePolicy, groupId: string, owner: Person): Promise<ObjectIds> => {
  const ids = randomIds(groupId)
  for (const kind of entry.objects ?? []) {
    const make = makers[kind]
    if (!make) throw new Error(`tests/api/support/objects.ts: no maker for ${kind}`)
    Object.assign(ids, await make({ groupId, owner }))
  }
  return ids
}

/** Everything a caller could compare: status, headers that are not of the moment, body without the request's id. */
const comparable = (answer: Answer) => {
  const headers = Object.fromEntries(answer.headers)
  for (const name of ['date', 'x-request-id', 'connection', 'keep-alive']) Reflect.deleteProperty(headers, name)
  if (headers['content-security-policy']) headers['content-security-policy'] = 'set'
  return { status: answer.status, headers, text: answer.text.replace(/"requestId":"[^"]*"/, '"requestId":""') }
}

const routes = listRouteFiles().map(toRoute)

beforeAll(async () => {
  world = await buildWorld()
})

describe('the policy table', () => {
  it('has an entry for every route file, and a route file for every entry', () => {
    expect(Object.keys(policy).sort()).toEqual(routes.map(({ file }) => file))
  })

  it('covers everything that the built server answers under /api', () => {
    const built = listBuiltRoutes().filter(({ route }) => route.startsWith('/api'))
    const listed = routes.map(
      ({ method, pattern }) => `${method} ${pattern.replace(/\[\.\.\.(\w+)\]/g, '**:$1').replace(/\[(\w+)\]/g, ':$1')}`,
    )
    expect(built.map(({ route, method }) => `${method} ${route}`).sort()).toEqual(listed.sort())
  })

  it('leaves outside /api only the shell of the pages', () => {
    const others = listBuiltRoutes().filter(({ route }) => !route.startsWith('/api'))
    expect(others.map(({ route }) => route).sort()).toEqual(['/**', '/__nuxt_error', '/__nuxt_island/**'])
  })
})

describe.each(routes.filter(({ file }) => policy[file] && isRole(policy[file].access)))(
  'group route $method $pattern',
  (route) => {
    const entry = policy[route.file] as RoutePolicy & { access: Role }
    const roleOf = (caller: Caller): Role | null => roles.find((role) => role === caller) ?? null

    it.each(callers)('%s and an object of the group', async (caller) => {
      const ids = await makeObjects(entry, world.groupId, world.people.owner)
      const role = roleOf(caller)
      const answer = await send(world.clientOf(caller), route, entry, ids)
      const allowed = role !== null && isAtLeast(role, entry.access)
      const expected = caller === 'signedOut' ? 401 : role === null ? 404 : allowed ? entry.status : 403
      expect(answer.status, answer.text.slice(0, 500)).toBe(expected)
      if (allowed) return
      const codes: Record<number, string> = { 401: 'session/required', 403: 'group/role', 404: 'request/not-found' }
      expect(answer.json.code).toBe(codes[expected])
    })

    it.each(callers)('%s cannot tell a group of others from one that does not exist', async (caller) => {
      const foreign = caller === 'outsider' ? world.groupId : world.otherGroupId
      const keeper = caller === 'outsider' ? world.people.owner : world.people.outsider
      const client = world.clientOf(caller)
      const real = comparable(await send(client, route, entry, await makeObjects(entry, foreign, keeper)))
      const invented = comparable(await send(client, route, entry, { ...randomIds(crypto.randomUUID()) }))
      expect(real).toEqual(invented)
      expect(real.status).toBe(caller === 'signedOut' ? 401 : 404)
    })

    if (!entry.objects) return
    it('gives an object of another group under the own group the answer of one that does not exist', async () => {
      const foreign = await makeObjects(entry, world.otherGroupId, world.people.outsider)
      const client = world.people.owner.client
      const real = comparable(await send(client, route, entry, { ...foreign, groupId: world.groupId }))
      const invented = comparable(await send(client, route, entry, randomIds(world.groupId)))
      expect(real).toEqual(invented)
      expect(real.status).toBe(404)
      // And it is still there for its own people.
      const kept = await send(world.people.outsider.client, route, entry, foreign)
      expect(kept.status, kept.text.slice(0, 500)).toBe(entry.status)
    })
  },
)

describe.each(routes.filter(({ file }) => policy[file] && !isRole(policy[file].access)))(
  'route outside groups $method $pattern',
  (route) => {
    const entry = policy[route.file] as RoutePolicy

    it('without a session', async () => {
      const answer = await send(world.clientOf('signedOut'), route, entry, randomIds(world.groupId))
      expect(answer.status, answer.text).toBe(entry.access === 'public' ? entry.status : 401)
    })

    it('with a session', async () => {
      // A person of its own: some of these routes end the session that calls them.
      const person = await register('Passing Person')
      const answer = await send(person.client, route, entry, await makeObjects(entry, world.groupId, person))
      expect(answer.status, answer.text).toBe(entry.status)
    })

    if (!entry.objects) return
    it('with the id of something that belongs to someone else', async () => {
      const theirs = await makeObjects(entry, world.groupId, world.people.outsider)
      const client = world.people.viewer.client
      const real = comparable(await send(client, route, entry, theirs))
      const invented = comparable(await send(client, route, entry, randomIds(world.groupId)))
      expect(real).toEqual(invented)
      expect(real.status).toBe(404)
    })
  },
)
