import { describe, expect, inject, it } from 'vitest'
import { startServer } from '../support/server'
import { Client } from './support/client'
import { sql } from './support/database'
import { readLog } from './support/log'
import { goodPassword, register } from './support/people'

const countHashes = async () => (await readLog()).split('"event":"password.hash"').length - 1

/** Runs the work and answers how many hashes the server computed meanwhile. */
const hashesOf = async (work: () => Promise<unknown>): Promise<number> => {
  const before = await countHashes()
  await work()
  return (await countHashes()) - before
}

const wrong = 'certainly not this long one'

describe('stored passwords', () => {
  it('cost what the handbook of web security asks for', async () => {
    const someone = await register('Stored Person')
    const [row] = await sql<{ password_hash: string }>('select password_hash from users where id = $1', [someone.id])
    expect(row?.password_hash).toMatch(/^\$scrypt\$n=131072,r=8,p=1\$/)
  })

  it('are hashed anew at sign-in when they were cheaper', async () => {
    const someone = await register('Early Person')
    // The same password under an earlier cost: N = 2^14.
    const { scryptSync, randomBytes } = await import('node:crypto')
    const salt = randomBytes(16)
    const hash = scryptSync(goodPassword, salt, 64, { N: 16384, r: 8, p: 1 })
    const text = (bytes: Buffer) => bytes.toString('base64').replace(/=+$/, '')
    const stored = `$scrypt$n=16384,r=8,p=1$${text(salt)}$${text(hash)}`
    await sql('update users set password_hash = $1 where id = $2', [stored, someone.id])
    expect((await new Client().post('/api/session', { email: someone.email, password: goodPassword })).status).toBe(200)
    const [row] = await sql<{ password_hash: string }>('select password_hash from users where id = $1', [someone.id])
    expect(row?.password_hash).toMatch(/^\$scrypt\$n=131072,r=8,p=1\$/)
    expect((await new Client().post('/api/session', { email: someone.email, password: goodPassword })).status).toBe(200)
  })

  it('do not depend on how the keyboard composes its letters', async () => {
    const email = `composed.${Date.now()}@institute.example`
    const composed = 'fünf stille Hügel über Århus'.normalize('NFC')
    const answer = await new Client().post('/api/accounts', { email, name: 'Composed', password: composed })
    expect(answer.status, answer.text).toBe(201)
    const signIn = await new Client().post('/api/session', { email, password: composed.normalize('NFD') })
    expect(signIn.status).toBe(200)
  })
})

describe('signing in', () => {
  it('answers an unknown address like a wrong password, with as much work', async () => {
    const someone = await register('Known Person')
    const answers: unknown[] = []
    for (const email of [someone.email, `nobody.${Date.now()}@institute.example`]) {
      const work = await hashesOf(async () => {
        const answer = await new Client().post('/api/session', { email, password: wrong })
        const { requestId: _requestId, ...body } = answer.json
        answers.push([answer.status, body])
      })
      expect(work).toBe(1)
    }
    expect(answers[0]).toEqual(answers[1])
  })

  it('does not mind capitals and blanks around the address', async () => {
    const someone = await register('Typing Person')
    const email = `  ${someone.email.toUpperCase()} `
    expect((await new Client().post('/api/session', { email, password: goodPassword })).status).toBe(200)
  })
})

describe('registering', () => {
  it('costs as much for a taken address as for a free one, and leaves the account alone', async () => {
    const someone = await register('First Person')
    const again = { email: someone.email, name: 'Second Person', password: goodPassword }
    let status = 0
    const work = await hashesOf(async () => {
      const answer = await new Client().post('/api/accounts', again)
      status = answer.status
      expect(answer.json.code).toBe('account/email-taken')
      expect(answer.headers.get('set-cookie')).toBeNull()
    })
    expect([status, work]).toEqual([409, 1])
    const [row] = await sql<{ name: string }>('select name from users where id = $1', [someone.id])
    expect(row?.name).toBe('First Person')
  })

  it('lets one of many at once have the address', async () => {
    const email = `race.${Date.now()}@institute.example`
    const answers = await Promise.all(
      Array.from({ length: 6 }, () =>
        new Client().post('/api/accounts', { email, name: 'Racer', password: goodPassword }),
      ),
    )
    expect(answers.map(({ status }) => status).sort()).toEqual([201, 409, 409, 409, 409, 409])
  })

  it.each([
    ['too short', 'fourteen signs', 'password'],
    ['too long', 'x'.repeat(100) + 'Qy7-'.repeat(40), 'password'],
    ['on the list of leaked ones', '1234567890123456', 'password'],
  ])('refuses a password that is %s, naming the field', async (_what, password, field) => {
    const body = { email: `p.${Date.now()}@institute.example`, name: 'Someone', password }
    const started = performance.now()
    let answer
    const work = await hashesOf(async () => (answer = await new Client().post('/api/accounts', body)))
    expect(answer).toMatchObject({ status: 422 })
    expect(answer).toHaveProperty('json.issues.0.path', [field])
    expect(work).toBe(0)
    // A hang guard at ten times the figure: a refused password must not cost a hash.
    expect(performance.now() - started).toBeLessThan(5000)
  })

  it('takes 15 and 256 characters, counted as people count them', async () => {
    const emoji = ['🦊', '🪐', '🌋', '🧭', '🪁', '🛶', '🎻', '🧲', '🔭', '🪻', '🦉', '🐚', '🍁', '🧊', '🎏'].join('')
    const long = Array.from({ length: 256 }, (_x, index) => String.fromCodePoint(0x4e00 + index * 7)).join('')
    for (const password of [emoji, long]) {
      const email = `len.${Date.now()}.${password.length}@institute.example`
      const answer = await new Client().post('/api/accounts', { email, name: 'Someone', password })
      expect(answer.status, answer.text).toBe(201)
      expect((await new Client().post('/api/session', { email, password })).status).toBe(200)
    }
  })

  it.each([
    ['email', { email: 'no address' }],
    ['email', { email: 'a@b.example\r\nbcc: c@d.example' }],
    ['name', { name: '' }],
    ['name', { name: 'two\nlines' }],
    ['name', { name: 'x'.repeat(201) }],
  ])('refuses a wrong %s', async (field, change) => {
    const body = { email: `w.${Date.now()}@institute.example`, name: 'Someone', password: goodPassword, ...change }
    const answer = await new Client().post('/api/accounts', body)
    expect([answer.status, answer.json.issues[0].path]).toEqual([422, [field]])
  })

  it('takes no column beside its own', async () => {
    const extra = { isAdministrator: true, isDemo: true, id: '00000000-0000-4000-8000-000000000000', role: 'owner' }
    const body = { email: `m.${Date.now()}@institute.example`, name: 'Someone', password: goodPassword, ...extra }
    const answer = await new Client().post('/api/accounts', body)
    expect([answer.status, answer.json.code]).toEqual([422, 'input/invalid'])
    expect(await sql('select 1 from users where is_administrator')).toEqual([])
  })
})

describe('guessing', () => {
  const guess = (client: Client, email: string) => client.post('/api/session', { email, password: wrong })

  it('is slowed down over two servers, whatever addresses are claimed, and its victim still gets in', async () => {
    const victim = await register('Victim Person')
    const second = await startServer({
      env: {
        DATABASE_URL: inject('databaseUrl'),
        NUXT_SESSION_PASSWORD: inject('sessionPassword'),
        NUXT_STORAGE_DIR: inject('storageDir'),
        NUXT_QUEUE: 'none',
      },
    })
    try {
      const statuses: number[] = []
      const work = await hashesOf(async () => {
        const waves = Array.from({ length: 40 }, async (_x, index) => {
          const client = new Client(index % 2 ? second.baseUrl : undefined)
          const headers = { 'sec-fetch-site': 'same-origin', 'x-forwarded-for': `198.51.100.${index}` }
          const answer = await client.post('/api/session', { email: victim.email, password: wrong }, { headers })
          statuses.push(answer.status)
          if (answer.status === 429) expect(Number(answer.headers.get('retry-after'))).toBeGreaterThan(0)
        })
        await Promise.all(waves)
      })
      expect(statuses.filter((status) => status === 401)).toHaveLength(5)
      expect(statuses.filter((status) => status === 429)).toHaveLength(35)
      expect(work).toBeLessThanOrEqual(5)
    } finally {
      await second.stop()
    }
    // A stranger with the right password waits; the browser in which its owner once signed in does not.
    const right = { email: victim.email, password: goodPassword }
    expect((await new Client().post('/api/session', right)).status).toBe(429)
    expect((await victim.client.post('/api/session', right)).status).toBe(200)
  })

  it('allows at most ten guesses of one account within any quarter of an hour', async () => {
    const email = `paced.${Date.now()}@institute.example`
    const waits: number[] = []
    for (let allowed = 0; allowed < 12;) {
      const answer = await guess(new Client(), email)
      if (answer.status === 401) {
        allowed++
        continue
      }
      expect(answer.status).toBe(429)
      waits.push(Number(answer.headers.get('retry-after')))
      // Time passes, as far as the table knows.
      await sql(`update sign_in_failures set blocked_until = now() - interval '1 second' where blocked_until > now()`)
    }
    expect(waits.slice(0, 6).map((seconds) => Math.round(seconds / 30))).toEqual([1, 2, 4, 8, 16, 32])
    // Five at once, then one after each wait: count the most that fit into 900 s from any of them.
    const times = [0, 0, 0, 0, 0]
    for (const wait of waits) times.push((times.at(-1) ?? 0) + wait)
    const most = Math.max(...times.map((start) => times.filter((time) => time >= start && time < start + 900).length))
    expect(most).toBeLessThanOrEqual(10)
  })

  it('is forgiven after the right password', async () => {
    const someone = await register('Forgetful Person')
    const client = new Client()
    for (let index = 0; index < 4; index++) expect((await guess(client, someone.email)).status).toBe(401)
    expect((await client.post('/api/session', { email: someone.email, password: goodPassword })).status).toBe(200)
    for (let index = 0; index < 4; index++) expect((await guess(new Client(), someone.email)).status).toBe(401)
  })

  it('of many accounts from one address is slowed down as well', async () => {
    const client = new Client()
    await sql(
      `insert into sign_in_failures (key, failures) values ($1, 59)
       on conflict (key) do update set failures = 59, blocked_until = null`,
      [`address:${client.address}`],
    )
    const statuses: number[] = []
    for (let index = 0; index < 3; index++) {
      statuses.push((await guess(client, `spread.${index}.${Date.now()}@institute.example`)).status)
    }
    expect(statuses).toEqual([401, 429, 429])
  })
})

describe('a storm of sign-ins', () => {
  it('is worked off two at a time and turned away beyond a short queue', async () => {
    const answers = await Promise.all(
      Array.from({ length: 60 }, (_x, index) =>
        new Client().post('/api/session', { email: `storm.${index}@institute.example`, password: wrong }),
      ),
    )
    const count = (status: number) => answers.filter((answer) => answer.status === status).length
    expect(count(401) + count(503)).toBe(60)
    expect(count(503)).toBeGreaterThan(0)
    expect(answers.find(({ status }) => status === 503)?.json.code).toBe('service/unavailable')
  })
})
