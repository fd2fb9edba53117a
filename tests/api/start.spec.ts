import { spawn, type ChildProcess } from 'node:child_process'
import { chmodSync, mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs'
import { createServer, type Server } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { freePort, projectRoot } from '../support/server'
import { Client } from './support/client'

/** `npm start` as a person types it, with a data folder of its own. Packages and build are there already. */
const data = mkdtempSync(join(tmpdir(), 'start-'))
chmodSync(data, 0o755)
let port = 0

interface Started {
  child: ChildProcess
  output: () => string
  seconds: number
  baseUrl: string
}

const running = new Set<ChildProcess>()

const start = (env: Record<string, string> = {}) => {
  const inherited: NodeJS.ProcessEnv = { ...process.env, LINEWRIGHT_DATA: data, PORT: String(port), ...env }
  for (const name of ['DATABASE_URL', 'DATABASE_OWNER_URL', 'PG_DIR', 'NODE_ENV'])
    Reflect.deleteProperty(inherited, name)
  const child = spawn(process.execPath, ['scripts/start.mjs'], { cwd: projectRoot, env: inherited })
  running.add(child)
  let text = ''
  child.stdout?.on('data', (part: Buffer) => (text += part.toString()))
  child.stderr?.on('data', (part: Buffer) => (text += part.toString()))
  const ended = new Promise<number | null>((resolve) => child.once('exit', resolve)).finally(() =>
    running.delete(child),
  )
  return { child, output: () => text, ended }
}

const startReady = async (env: Record<string, string> = {}): Promise<Started> => {
  const since = performance.now()
  const { child, output, ended } = start(env)
  let isOver = false
  void ended.then(() => (isOver = true))
  while (!/ready at http:\S+/.test(output())) {
    if (isOver || performance.now() - since > 180_000) throw new Error(`npm start did not get ready:\n${output()}`)
    await new Promise((resolve) => setTimeout(resolve, 50))
  }
  const seconds = (performance.now() - since) / 1000
  // The accounts are printed right after the address.
  await new Promise((resolve) => setTimeout(resolve, 200))
  return { child, output, seconds, baseUrl: /ready at (http:\S+)/.exec(output())?.[1] ?? '' }
}

const stop = (child: ChildProcess, signal: NodeJS.Signals): Promise<number | null> => {
  const ended = new Promise<number | null>((resolve) => child.once('exit', resolve))
  child.kill(signal)
  return ended
}

const listenOn = (wanted: number) =>
  new Promise<Server>((resolve, reject) => {
    const server = createServer()
    server.once('error', reject)
    server.listen(wanted, '127.0.0.1', () => resolve(server))
  })

beforeAll(async () => {
  port = await freePort()
})
afterAll(async () => {
  await Promise.all([...running].map((child) => stop(child, 'SIGTERM')))
  rmSync(data, { recursive: true, force: true })
})

describe('npm start', () => {
  const passwords: Record<string, string> = {}
  let ownGroup = ''

  const signIn = async (baseUrl: string, email: string) => {
    const client = new Client(baseUrl)
    const answer = await client.post('/api/session', { email, password: passwords[email] })
    expect(answer.status, answer.text).toBe(200)
    return client
  }

  it('makes a database, loads the demo and says where to go and who may sign in', async () => {
    const { child, output, baseUrl } = await startReady()
    expect(baseUrl).toBe(`http://127.0.0.1:${port}`)
    for (const [, role, email, password] of output().matchAll(/^\s+(owner|editor|viewer)\s+(\S+@\S+)\s+(\S+)$/gm)) {
      expect(role).toBe(email?.split('@')[0])
      passwords[email ?? ''] = password ?? ''
    }
    expect(Object.keys(passwords).length).toBe(3)
    for (const email of Object.keys(passwords)) {
      const { json } = await (await signIn(baseUrl, email)).get('/api/session')
      expect(json.groups).toEqual([expect.objectContaining({ isDemo: true, role: email.split('@')[0] })])
    }
    const owner = await signIn(baseUrl, Object.keys(passwords).find((email) => email.startsWith('owner')) ?? '')
    ownGroup = (await owner.post('/api/groups', { name: 'Kept over the night' })).json.id
    expect(await stop(child, 'SIGINT')).toBe(0)
  })

  it('keeps its secrets to itself', () => {
    for (const file of ['secrets/session-password', 'demo-accounts.json']) {
      expect(statSync(join(data, file)).mode & 0o777).toBe(0o600)
    }
    expect(readFileSync(join(data, 'secrets/session-password'), 'utf8').trim().length).toBeGreaterThanOrEqual(43)
  })

  it('takes seconds the second time, has lost nothing, and prints no password again', async () => {
    const { child, output, seconds, baseUrl } = await startReady()
    // A hang guard: seconds on a quiet machine.
    expect(seconds).toBeLessThan(60)
    for (const password of Object.values(passwords)) expect(output()).not.toContain(password)
    expect(output()).toContain(join(data, 'demo-accounts.json'))
    const owner = await signIn(baseUrl, Object.keys(passwords).find((email) => email.startsWith('owner')) ?? '')
    expect((await owner.get(`/api/groups/${ownGroup}`)).json.name).toBe('Kept over the night')

    const again = start()
    expect(await again.ended).toBe(0)
    expect(again.output()).toContain(`already running at ${baseUrl}`)
    expect((await owner.get('/api/session')).json.user).not.toBeNull()
    expect(await stop(child, 'SIGTERM')).toBe(0)
  })

  it('moves to the next port when another program has its own', async () => {
    const other = await listenOn(port)
    const { child, baseUrl } = await startReady()
    expect(Number(new URL(baseUrl).port)).toBeGreaterThan(port)
    expect(await stop(child, 'SIGTERM')).toBe(0)
    await new Promise((resolve) => other.close(resolve))
  })

  it('says what is wrong with a port that is none', async () => {
    const { output, ended } = start({ PORT: 'http' })
    expect(await ended).toBe(1)
    expect(output()).toContain('PORT: expected a whole number from 1 to 65535; found "http"')
  })

  it('leaves no server behind', () => {
    const pidFile = join(data, 'server.json')
    expect(() => readFileSync(pidFile)).toThrow(/ENOENT/)
  })
})
