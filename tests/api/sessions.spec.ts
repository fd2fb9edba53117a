import { sealSession, type H3Event } from 'h3'
import { beforeAll, describe, expect, inject, it } from 'vitest'
import { startServer, type BuiltServer } from '../support/server'
import { Client } from './support/client'
import { sql } from './support/database'
import { goodPassword, register, type Person } from './support/people'

const sessionOf = async (client: Client) => (await client.get('/api/session')).json.user
const isIn = async (client: Client) => (await client.get('/api/groups')).status

/** A second process on the same database: nothing about a session may live in one of them. */
const withSecondServer = async (env: Record<string, string>, work: (server: BuiltServer) => Promise<void>) => {
  const server = await startServer({
    env: {
      DATABASE_URL: inject('databaseUrl'),
      NUXT_SESSION_PASSWORD: inject('sessionPassword'),
      NUXT_STORAGE_DIR: inject('storageDir'),
      NUXT_QUEUE: 'none',
      ...env,
    },
  })
  try {
    await work(server)
  } finally {
    await server.stop()
  }
}

const seal = (name: string, password: string, data: Record<string, unknown>): Promise<string> => {
  const session = { id: 'chosen-by-someone-else', createdAt: Date.now(), data }
  const event = { context: { sessions: { [name]: session } } } as unknown as H3Event
  return sealSession(event, { name, password })
}

let person: Person
beforeAll(async () => {
  person = await register('Session Person')
})

const signIn = async (email = person.email, client = new Client()): Promise<Client> => {
  const answer = await client.post('/api/session', { email, password: goodPassword })
  expect(answer.status, answer.text).toBe(200)
  return client
}

describe('cookies', () => {
  it('are absent for anonymous visitors', async () => {
    const client = new Client()
    for (const path of ['/', '/sign-in', '/api/session', '/api/health/live', '/api/groups', '/api/nothing']) {
      await client.get(path)
    }
    expect(client.received).toEqual([])
  })

  it('are host-bound, unreadable for scripts, and small', async () => {
    const client = await signIn()
    expect(client.received).toHaveLength(2)
    for (const line of client.received) {
      expect(line).toMatch(/^__Host-linewright(-device)?=/)
      expect(line).toMatch(/; Path=\/(;|$)/)
      expect(line).toMatch(/; HttpOnly(;|$)/)
      expect(line).toMatch(/; Secure(;|$)/)
      expect(line).toMatch(/; SameSite=Lax(;|$)/)
      expect(line).not.toMatch(/domain=/i)
      expect(Buffer.byteLength(line.split(';', 1)[0] ?? '')).toBeLessThanOrEqual(1024)
    }
  })

  it('keep the plain name where the operator switched Secure off', async () => {
    await withSecondServer({ NUXT_SESSION_COOKIE_SECURE: 'false' }, async (server) => {
      const client = await signIn(person.email, new Client(server.baseUrl))
      expect([...client.cookies.keys()].sort()).toEqual(['linewright', 'linewright-device'])
      expect(client.received.filter((line) => /secure/i.test(line))).toEqual([])
      expect(await isIn(client)).toBe(200)
    })
  })

  it('open a session only as cookies', async () => {
    const client = await signIn()
    const sealed = client.cookies.get('__Host-linewright') ?? ''
    for (const name of [
      'x-__host-linewright-session',
      'x-linewright-session',
      'x-nuxt-session-session',
      'authorization',
    ]) {
      const answer = await new Client().get('/api/groups', { headers: { [name]: sealed } })
      expect(answer.status).toBe(401)
    }
    expect((await client.get('/api/_auth/session')).status).toBe(404)
    expect((await client.remove('/api/_auth/session')).status).toBe(404)
  })

  it('are taken back when they open nothing any more', async () => {
    const client = new Client()
    client.cookies.set('__Host-linewright', 'Fe26.2**nonsense')
    const answer = await client.get('/api/session')
    expect(answer.json).toEqual({ user: null, groups: [] })
    expect(client.cookies.size).toBe(0)
  })
})

describe('signing in', () => {
  it('carries nothing over from an earlier cookie', async () => {
    const planted = { role: 'admin', secure: { token: 'known-to-someone-else' } }
    const name = '__Host-linewright'
    const client = new Client()
    client.cookies.set(name, await seal(name, inject('sessionPassword'), planted))
    const before = client.cookies.get(name)
    await signIn(person.email, client)
    expect(client.cookies.get(name)).not.toBe(before)
    const [row] = await sql<{ count: number }>(
      `select count(*)::int as count from sessions where token_hash = encode(sha256('known-to-someone-else'), 'hex')`,
    )
    expect(row?.count).toBe(0)
    expect(await isIn(client)).toBe(200)
  })

  it('ends the session that the browser held before', async () => {
    const client = await signIn()
    const old = client.copy()
    await signIn(person.email, client)
    expect(await isIn(old)).toBe(401)
    expect(await isIn(client)).toBe(200)
  })

  it('keeps only a hash of what the cookie carries', async () => {
    const client = await signIn()
    const rows = await sql<{ token_hash: string }>('select token_hash from sessions where user_id = $1', [person.id])
    expect(rows.length).toBeGreaterThan(0)
    for (const row of rows) {
      expect(row.token_hash).toMatch(/^[0-9a-f]{64}$/)
      expect(client.cookies.get('__Host-linewright')).not.toContain(row.token_hash)
    }
  })
})

describe('a copied cookie is worth nothing after', () => {
  const dead = async (copies: Client[]) => {
    for (const copy of copies) {
      expect(await isIn(copy)).toBe(401)
      expect(await sessionOf(copy)).toBeNull()
    }
  }

  it('signing out, at either of two servers', async () => {
    await withSecondServer({}, async (second) => {
      const client = await signIn()
      const copies = [client.copy(), client.copy(second.baseUrl)]
      for (const copy of copies) expect(await isIn(copy)).toBe(200)
      expect((await client.remove('/api/session')).status).toBe(204)
      await dead(copies)
    })
  })

  it('being ended from another browser', async () => {
    const client = await signIn()
    const other = await signIn()
    const copy = other.copy()
    const { json } = await other.get('/api/sessions')
    const { id } = json.sessions.find((session: { current: boolean }) => session.current)
    expect((await client.remove(`/api/sessions/${id}`)).status).toBe(204)
    await dead([copy])
    expect(await isIn(client)).toBe(200)
  })

  it('a change of the password, which leaves this browser signed in under a new session', async () => {
    const someone = await register('Careful Person')
    const other = await signIn(someone.email)
    const copies = [someone.client.copy(), other.copy()]
    const change = { currentPassword: goodPassword, newPassword: 'eleven quiet harbours at dawn' }
    expect((await someone.client.put('/api/account/password', change)).status).toBe(204)
    await dead(copies)
    expect(await isIn(someone.client)).toBe(200)
    expect((await new Client().post('/api/session', { email: someone.email, password: goodPassword })).status).toBe(401)
  })

  it('disabling or deleting the account', async () => {
    const disabled = await register('Disabled Person')
    await sql('update users set disabled_at = now() where id = $1', [disabled.id])
    await dead([disabled.client.copy()])
    const answer = await new Client().post('/api/session', { email: disabled.email, password: goodPassword })
    expect([answer.status, answer.json.code]).toEqual([401, 'session/invalid-credentials'])
    const deleted = await register('Deleted Person')
    await sql('delete from users where id = $1', [deleted.id])
    await dead([deleted.client.copy()])
  })
})

describe('a session ends by itself', () => {
  const shift = (client: string, column: string, interval: string) =>
    sql(`update sessions set ${column} = now() + interval '${interval}' where user_id = $1`, [client])

  it.each([
    ['after seven days without use', 'last_seen_at', '-7 days 3 seconds', '-7 days -1 second'],
    ['after thirty days in any case', 'expires_at', '3 seconds', '-1 second'],
  ])('%s, by the clock of the database', async (_when, column, before, after) => {
    const someone = await register('Timed Person')
    await shift(someone.id, column, before)
    expect(await isIn(someone.client.copy())).toBe(200)
    await shift(someone.id, column, after)
    expect(await isIn(someone.client.copy())).toBe(401)
  })

  it('begins with thirty days', async () => {
    const someone = await register('Dated Person')
    const [row] = await sql<{ days: number }>(
      `select extract(epoch from expires_at - created_at)::float8 / 86400 as days from sessions where user_id = $1`,
      [someone.id],
    )
    expect(row?.days).toBeCloseTo(30, 6)
  })

  it('is kept alive by use', async () => {
    const someone = await register('Busy Person')
    await shift(someone.id, 'last_seen_at', '-6 days')
    expect(await isIn(someone.client)).toBe(200)
    const [row] = await sql<{ fresh: boolean }>(
      `select last_seen_at > now() - interval '1 minute' as fresh from sessions where user_id = $1`,
      [someone.id],
    )
    expect(row?.fresh).toBe(true)
  })
})

describe('an open browser left alone', () => {
  it('must give the password again before it ends other sessions', async () => {
    const someone = await register('Absent Person')
    const other = await signIn(someone.email)
    const { json } = await other.get('/api/sessions')
    const { id } = json.sessions.find((session: { current: boolean }) => session.current)
    await sql(`update sessions set confirmed_at = now() - interval '1 day' where user_id = $1`, [someone.id])
    const refused = await someone.client.remove(`/api/sessions/${id}`)
    expect([refused.status, refused.json.code]).toEqual([403, 'session/confirm-password'])
    const wrong = await someone.client.post('/api/session/confirmation', { password: 'not the right one at all' })
    expect([wrong.status, wrong.json.issues[0].path]).toEqual([403, ['password']])
    expect((await someone.client.post('/api/session/confirmation', { password: goodPassword })).status).toBe(204)
    expect((await someone.client.remove(`/api/sessions/${id}`)).status).toBe(204)
  })

  it('cannot change the password without the present one', async () => {
    const someone = await register('Locked Person')
    const change = { currentPassword: 'not the right one at all', newPassword: 'eleven quiet harbours at dawn' }
    const answer = await someone.client.put('/api/account/password', change)
    expect([answer.status, answer.json.code, answer.json.issues[0].path]).toEqual([
      403,
      'session/confirm-password',
      ['currentPassword'],
    ])
  })
})

describe('the secret that seals cookies', () => {
  it('can be changed without signing anyone out', async () => {
    const client = await signIn()
    const env = { NUXT_SESSION_PASSWORD: 'k'.repeat(20) + 'Q9x-71_mZ'.repeat(3) }
    const overlap = { ...env, NUXT_SESSION_PREVIOUS_PASSWORD: inject('sessionPassword') }
    await withSecondServer(overlap, async (server) => expect(await isIn(client.copy(server.baseUrl))).toBe(200))
    await withSecondServer(env, async (server) => expect(await isIn(client.copy(server.baseUrl))).toBe(401))
  })
})
