import { readdirSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, inject, it } from 'vitest'
import { projectRoot, startServer } from '../support/server'
import { Client, type Answer } from './support/client'
import { makers, type ObjectIds } from './support/objects'
import { createGroup, register } from './support/people'

const asset = readdirSync(join(projectRoot, '.output/public/_nuxt')).find((name) => name.endsWith('.js')) ?? ''

const always: Record<string, string> = {
  'x-content-type-options': 'nosniff',
  'referrer-policy': 'no-referrer',
  'cross-origin-opener-policy': 'same-origin',
  'cross-origin-resource-policy': 'same-origin',
  'x-frame-options': 'DENY',
}

const expectFences = (answer: Answer, what: string) => {
  for (const [name, value] of Object.entries(always)) {
    expect([what, name, answer.headers.get(name)]).toEqual([what, name, value])
  }
  expect(answer.headers.get('permissions-policy')).toContain('camera=()')
  expect([what, answer.headers.get('x-powered-by'), answer.headers.get('server')]).toEqual([what, null, null])
  expect(answer.headers.get('content-security-policy'), what).toContain("default-src 'none'")
  expect([what, answer.headers.get('strict-transport-security')]).toEqual([what, null])
  expect(answer.text, what).not.toMatch(/node_modules|\bat \w+ \(|select .* from/i)
}

let client: Client
let download: string

beforeAll(async () => {
  const person = await register('Header Person')
  client = person.client
  const groupId = await createGroup(person, 'Headers')
  const ids = (await makers.setId?.({ groupId, owner: person })) as Partial<ObjectIds>
  download = `/api/groups/${groupId}/sets/${ids.setId}/versions/1/file`
})

describe('every kind of answer', () => {
  it('carries the fences', async () => {
    const cases: [string, number, () => Promise<Answer>][] = [
      ['the shell', 200, () => client.get('/')],
      ['the shell of a deep page', 200, () => client.get('/groups/x/sets')],
      ['a script', 200, () => client.get(`/_nuxt/${asset}`)],
      ['a script that is not there', 404, () => client.get('/_nuxt/nothing.js')],
      ['data', 200, () => client.get('/api/groups')],
      ['a download', 200, () => client.get(download)],
      ['nobody signed in', 401, () => new Client().get('/api/groups')],
      ['another site', 403, () => client.post('/api/groups', {}, { headers: {} })],
      ['nothing there', 404, () => client.get('/api/nothing')],
      ['a wrong method', 405, () => client.put('/api/groups', {})],
      ['too much', 413, () => client.post('/api/groups', { name: 'x'.repeat(1_100_000) })],
      ['a wrong type', 415, () => client.send('/api/groups', { method: 'POST', body: 'x', contentType: 'text/plain' })],
      ['wrong values', 422, () => client.post('/api/groups', { name: '' })],
    ]
    for (const [what, status, ask] of cases) {
      const answer = await ask()
      expect([what, answer.status]).toEqual([what, status])
      expectFences(answer, what)
    }
  })

  it('is kept by no cache where it is private', async () => {
    for (const path of ['/api/groups', '/api/session', '/api/nothing', download]) {
      expect([path, (await client.get(path)).headers.get('cache-control')]).toEqual([path, 'no-store'])
    }
  })

  it('of a script not modified carries them too', async () => {
    const first = await client.get(`/_nuxt/${asset}`)
    const etag = first.headers.get('etag') ?? ''
    const second = await client.get(`/_nuxt/${asset}`, { headers: { 'if-none-match': etag } })
    expect(second.status).toBe(304)
    expectFences(second, 'not modified')
  })
})

describe('the shell', () => {
  const directives = (answer: Answer) =>
    new Map(
      (answer.headers.get('content-security-policy') ?? '').split('; ').map((part) => {
        const [name = '', ...values] = part.split(' ')
        return [name, values]
      }),
    )

  it('admits scripts by nonce alone', async () => {
    const answer = await client.get('/')
    const policy = directives(answer)
    const nonce = /^'nonce-(.+)'$/.exec(policy.get('script-src')?.[0] ?? '')?.[1]
    expect(policy.get('script-src')).toEqual([`'nonce-${nonce}'`, "'strict-dynamic'", "'wasm-unsafe-eval'"])
    expect(policy.get('style-src-elem')).not.toContain("'unsafe-inline'")
    for (const name of ['object-src', 'base-uri', 'frame-ancestors']) expect(policy.get(name)).toEqual(["'none'"])
    const tags = [...answer.text.matchAll(/<script\b[^>]*>/g)].map(([tag]) => tag)
    expect(tags.length).toBeGreaterThan(2)
    for (const tag of tags) expect(tag).toContain(`nonce="${nonce}"`)
  })

  it('never uses a nonce twice', async () => {
    const nonces = new Set<string>()
    for (let index = 0; index < 100; index++) {
      nonces.add(directives(await client.get('/')).get('script-src')?.[0] ?? '')
    }
    expect(nonces.size).toBe(100)
  })

  it('holds no data of anyone', async () => {
    const text = (await client.get('/')).text.replaceAll(/nonce="[^"]*"/g, '')
    expect(text).toBe((await new Client().get('/')).text.replaceAll(/nonce="[^"]*"/g, ''))
  })
})

describe('over https', () => {
  it('browsers are told to come back that way only', async () => {
    const server = await startServer({
      env: {
        DATABASE_URL: inject('databaseUrl'),
        NUXT_STORAGE_DIR: inject('storageDir'),
        NUXT_BASE_URL: 'https://linewright.institute.example',
        NUXT_QUEUE: 'none',
      },
    })
    try {
      const other = new Client(server.baseUrl)
      for (const path of ['/', '/api/nothing', `/_nuxt/${asset}`]) {
        const value = (await other.get(path)).headers.get('strict-transport-security')
        expect(value).toBe('max-age=63072000; includeSubDomains')
      }
      // The configured address decides what our own pages are, whatever the Host header says.
      const headers = { origin: server.baseUrl, host: 'linewright.institute.example' }
      expect((await other.post('/api/session', {}, { headers })).status).toBe(403)
      const own = { origin: 'https://linewright.institute.example' }
      expect((await other.post('/api/session', {}, { headers: own })).status).toBe(422)
    } finally {
      await server.stop()
    }
  })
})
