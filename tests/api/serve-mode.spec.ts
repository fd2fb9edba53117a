import { spawn, spawnSync, type ChildProcess } from 'node:child_process'
import { randomBytes } from 'node:crypto'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { Client as SqlClient } from 'pg'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { freePort, projectRoot } from '../support/server'

/** `npm run serve`, the production mode, as an operator starts it. */
const database = `test_serve_${randomBytes(6).toString('hex')}`
const folder = mkdtempSync(join(tmpdir(), 'serve-'))
let env: Record<string, string>

const bare = { PATH: process.env.PATH ?? '', HOME: process.env.HOME ?? '' }

const refusedWith = (given: Record<string, string>) => {
  const done = spawnSync(process.execPath, ['scripts/serve.mjs'], {
    cwd: projectRoot,
    env: { ...bare, ...given },
    encoding: 'utf8',
    timeout: 60_000,
  })
  return { code: done.status, text: done.stdout + done.stderr }
}

beforeAll(async () => {
  const addresses = await createDatabase(database, { unsafeFast: true })
  env = {
    NODE_ENV: 'production',
    PORT: String(await freePort()),
    NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
    NUXT_BASE_URL: 'https://lines.institute.example',
    NUXT_STORAGE_DIR: join(folder, 'files'),
    DATABASE_URL: addresses.DATABASE_URL,
    DATABASE_OWNER_URL: addresses.DATABASE_OWNER_URL,
  }
})
afterAll(async () => {
  await dropDatabase(database)
  rmSync(folder, { recursive: true, force: true })
})

describe('the production mode refuses to start', () => {
  it('without anything, and lists all of it', () => {
    const { code, text } = refusedWith({})
    expect(code).toBe(1)
    for (const name of ['NODE_ENV', 'NUXT_SESSION_PASSWORD', 'DATABASE_URL', 'NUXT_BASE_URL', 'NUXT_STORAGE_DIR']) {
      expect(text).toContain(`- ${name}: `)
    }
    expect(text).not.toContain('Listening')
  })

  it.each([
    ['short', 'short'],
    ['an example', 'change-me-change-me-change-me-change-me'],
  ])('with a session secret that is %s', (_kind, secret) => {
    const { code, text } = refusedWith({ ...env, NUXT_SESSION_PASSWORD: secret })
    expect(code).toBe(1)
    expect(text).toContain('NUXT_SESSION_PASSWORD')
    expect(text).not.toContain(secret)
  })
})

describe('the production mode', () => {
  let child: ChildProcess
  let output = ''
  const get = (path: string) => fetch(`http://127.0.0.1:${env.PORT}${path}`, { redirect: 'manual' })

  beforeAll(async () => {
    child = spawn(process.execPath, ['scripts/serve.mjs'], { cwd: projectRoot, env: { ...bare, ...env } })
    const note = (part: Buffer) => (output += part.toString())
    child.stdout?.on('data', note)
    child.stderr?.on('data', note)
    const deadline = performance.now() + 180_000
    for (;;) {
      const ready = await get('/api/health/ready').catch(() => null)
      if (ready?.ok) break
      if (child.exitCode !== null || performance.now() > deadline)
        throw new Error(`npm run serve did not start:\n${output}`)
      await pause(100)
    }
  })
  afterAll(async () => {
    if (child.exitCode !== null) return
    child.kill('SIGTERM')
    await new Promise((resolve) => child.once('exit', resolve))
  })

  it('has nobody in it and prints no password', async () => {
    const client = new SqlClient({ connectionString: env.DATABASE_OWNER_URL })
    await client.connect()
    const { rows } = await client.query('select count(*)::int as people from users')
    await client.end()
    expect(rows).toEqual([{ people: 0 }])
    expect(output).not.toMatch(/demo/i)
  })

  it('tells browsers to come back over https only', async () => {
    const answer = await get('/')
    expect(answer.headers.get('strict-transport-security')).toMatch(/max-age=\d{8,}; includeSubDomains/)
  })

  it('serves nothing that was left lying about', async () => {
    const names = [
      ...['.git/HEAD', '.git/config', '.env', '.env.local', '.npmrc', '.nuxtrc', '.data/secrets/session-password'],
      ...['package.json', 'package-lock.json', 'nuxt.config.ts', 'tsconfig.json', 'README.md', 'DEVELOPERS.md'],
      ...['server/index.mjs', 'server/api/session', 'node_modules/nuxt/package.json', 'drizzle/0000_init.sql'],
      ...['_nuxt/../server/index.mjs', '..%2fserver%2findex.mjs', '%2e%2e/%2e%2e/etc/passwd', '_nuxt/%2e%2e/server'],
      ...['_openapi.json', '_swagger', '_scalar', '__nuxt_devtools__/client', '_nuxt/builds/dev.json', '__nuxt_error'],
      ...['api/_auth/session', 'api/_nuxt_icon/lucide.json', '_ipx/x', '_vfs.json', '_nitro/tasks', 'api/_content'],
      ...['mail', 'mails', '_mail', 'admin', 'phpinfo.php', 'server-status', 'debug', 'metrics', 'actuator/health'],
      ...['backup.zip', 'dump.sql', 'db.sqlite', 'config.json', 'id_rsa', 'docker-compose.yml', 'Dockerfile'],
    ]
    const found: string[] = []
    for (const name of names) {
      const answer = await get(`/${name}`)
      const text = await answer.text()
      // A page that does not exist is the shell of the application; anything else has to be an error.
      const isShell = text.startsWith('<!DOCTYPE html><html') && text.includes('/_nuxt/')
      if (answer.status < 400 && !isShell) found.push(`${name}: ${answer.status} ${text.slice(0, 60)}`)
    }
    expect(found).toEqual([])
  })

  it('ends in order, with 0', async () => {
    child.kill('SIGTERM')
    const code = await new Promise((resolve) => child.once('exit', resolve))
    expect(code).toBe(0)
  })

  it('does not start again on a database with demo accounts', async () => {
    const client = new SqlClient({ connectionString: env.DATABASE_OWNER_URL })
    await client.connect()
    await client.query(
      "insert into users (email, name, password_hash, is_demo) values ('owner@demo.example', 'Demo', 'x', true)",
    )
    await client.end()
    const { code, text } = refusedWith(env)
    expect(code).toBe(1)
    expect(text).toMatch(/holds 1 demo accounts/)
    expect(text).not.toContain('Listening')
  })
})
