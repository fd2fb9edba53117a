import { setTimeout as pause } from 'node:timers/promises'
import { describe, expect, inject, it } from 'vitest'
import { startServer } from '../support/server'
import { Client } from './support/client'
import { startProxy } from './support/proxy'
import { goodPassword, register } from './support/people'

const env = () => ({
  DATABASE_URL: inject('databaseUrl'),
  NUXT_SESSION_PASSWORD: inject('sessionPassword'),
  NUXT_STORAGE_DIR: inject('storageDir'),
  LOG_LEVEL: 'debug',
})

/** Makes the built server fail on a signal, as a mistake in a timer would. */
const planted = (failure: string) =>
  `data:text/javascript,process.on('SIGUSR2',()=>setTimeout(()=>{${failure}},0))`.replaceAll(' ', '%20')

describe('the process', () => {
  it.each([
    ['throws in a timer', "throw new Error('planted')", 'process.uncaught-exception'],
    ['leaves a rejection unhandled', "Promise.reject(new Error('planted'))", 'process.unhandled-rejection'],
  ])('that %s says so and ends with an error', async (_what, failure, event) => {
    const server = await startServer({ env: { ...env(), NODE_OPTIONS: `--import=${planted(failure)}` } })
    const ended = new Promise<number | null>((done) => server.process.once('exit', (code) => done(code)))
    const started = performance.now()
    server.process.kill('SIGUSR2')
    expect(await ended).toBe(1)
    expect(performance.now() - started).toBeLessThan(15_000)
    const lines = server
      .output()
      .split('\n')
      .filter((line) => line.startsWith('{'))
    expect(lines.map((line) => JSON.parse(line)).find((line) => line.event === event)).toMatchObject({
      level: 'fatal',
      err: { message: 'planted' },
    })
  })

  it.each(['SIGTERM', 'SIGINT'] as const)('ends in order on %s, also when it comes twice', async (signal) => {
    const server = await startServer({ env: env() })
    const started = performance.now()
    const stopping = server.stop(signal)
    server.process.kill(signal)
    expect(await stopping).toBe(0)
    expect(performance.now() - started).toBeLessThan(10_000)
  })

  it('finishes a request that is under way', async () => {
    const person = await register('Last Person')
    const server = await startServer({ env: env() })
    const answer = new Client(server.baseUrl).post('/api/session', { email: person.email, password: goodPassword })
    await pause(150)
    const code = await server.stop()
    expect([(await answer).status, code]).toEqual([200, 0])
  })
})

describe('a server that lacks something it needs', () => {
  it.each([
    ['NUXT_SESSION_PASSWORD', { NUXT_SESSION_PASSWORD: 'short' }],
    ['NUXT_SESSION_PASSWORD', { NUXT_SESSION_PASSWORD: '' }],
    ['DATABASE_URL', { DATABASE_URL: '' }],
    ['NUXT_BASE_URL', { NUXT_BASE_URL: 'linewright' }],
    ['NUXT_TRUSTED_PROXIES', { NUXT_TRUSTED_PROXIES: 'all' }],
  ])('does not start, and names %s', async (name, change) => {
    await expect(startServer({ env: { ...env(), ...change } })).rejects.toThrow(`${name}: expected`)
  })
})

describe('without its database', () => {
  it('the server lives, is not ready, answers 503 at once, and recovers by itself', async () => {
    const person = await register('Patient Person')
    const url = new URL(inject('databaseUrl'))
    const proxy = await startProxy({ host: url.hostname, port: Number(url.port) })
    url.port = String(proxy.port)
    const server = await startServer({ env: { ...env(), DATABASE_URL: url.href } })
    try {
      const client = person.client.copy(server.baseUrl)
      expect((await client.get('/api/groups')).status).toBe(200)
      proxy.cut()
      const started = performance.now()
      const refused = await client.get('/api/groups')
      expect([refused.status, refused.json.code]).toEqual([503, 'service/unavailable'])
      expect(performance.now() - started).toBeLessThan(10_000)
      expect((await client.get('/api/health/live')).status).toBe(200)
      expect((await client.get('/api/health/ready')).status).toBe(503)
      proxy.mend()
      await pause(200)
      expect((await client.get('/api/groups')).status).toBe(200)
      expect((await client.get('/api/health/ready')).status).toBe(200)
      expect(server.process.exitCode).toBeNull()
    } finally {
      await server.stop()
      await proxy.close()
    }
  })
})

describe('the log', () => {
  it('tells of sign-ins and refusals by request, and holds no secret', async () => {
    const secret = 'a secret that must never be written down'
    const server = await startServer({ env: env() })
    const client = new Client(server.baseUrl)
    const email = `logged.${Date.now()}@institute.example`
    const registered = await client.post('/api/accounts', { email, name: 'Logged Person', password: secret })
    expect(registered.status).toBe(201)
    const cookie = client.cookies.get('__Host-linewright') ?? 'none'
    await client.post('/api/session', { email, password: `${secret}, wrong` })
    await client.post('/api/session', { email, password: secret })
    await client.post('/api/accounts', { email, name: 'Again\r\n{"forged":true}', password: secret })
    await client.get(`/api/groups/x%0d%0aforged?token=${encodeURIComponent(secret)}`)
    await client.send('/api/groups', { method: 'POST', body: `{"name": "${secret}`, contentType: 'application/json' })
    await server.stop()
    const output = server.output()
    const events = output
      .split('\n')
      .filter((line) => line.startsWith('{'))
      .map((line) => JSON.parse(line).event)
    for (const event of [
      'account.created',
      'session.refused',
      'session.opened',
      'request.refused',
      'process.stopping',
    ]) {
      expect(events).toContain(event)
    }
    for (const word of [secret, encodeURIComponent(secret), cookie, email, env().NUXT_SESSION_PASSWORD, 'scrypt$']) {
      expect(output.includes(word), word.slice(0, 12)).toBe(false)
    }
    expect(output.split('\n').filter((line) => /^\s*(\{"forged"|forged)/.test(line))).toEqual([])
  })
})
