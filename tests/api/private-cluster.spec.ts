import { spawnSync } from 'node:child_process'
import {
  chmodSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs'
import { createServer, type Server } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { Client } from 'pg'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { projectRoot } from '../support/server'

/** Runs the command as a person would, on a data folder of its own. */
const command = (data: string, args: string[], env: Record<string, string> = {}) => {
  const inherited = { ...process.env, LINEWRIGHT_DATA: data }
  delete (inherited as NodeJS.ProcessEnv).PG_DIR
  const done = spawnSync(process.execPath, ['scripts/pg.mjs', ...args], {
    cwd: projectRoot,
    env: { ...inherited, ...env },
    encoding: 'utf8',
    timeout: 90_000,
  })
  return { code: done.status, text: done.stdout + done.stderr }
}

const makeDataFolder = (mode: number) => {
  const folder = mkdtempSync(join(tmpdir(), 'cluster-'))
  chmodSync(folder, mode)
  return folder
}

const portIn = (text: string) => Number(/127\.0\.0\.1:(\d+)/.exec(text)?.[1])

const listenOn = (port: number) =>
  new Promise<Server>((resolve, reject) => {
    const server = createServer()
    server.once('error', reject)
    server.listen(port, '127.0.0.1', () => resolve(server))
  })

describe('the private PostgreSQL cluster', () => {
  const data = makeDataFolder(0o755)
  let folder = ''
  let major = 0
  let port = 0

  beforeAll(() => {
    const { code, text } = command(data, ['start'])
    expect(text).toMatch(/PostgreSQL \d+ on 127\.0\.0\.1:\d+/)
    expect(code).toBe(0)
    port = portIn(text)
    major = Number(/PostgreSQL (\d+) on/.exec(text)?.[1])
    folder = join(data, `postgres-${major}`)
  })

  afterAll(() => {
    command(data, ['stop'])
    rmSync(data, { recursive: true, force: true })
  })

  const connect = async (role: string) => {
    const password = readFileSync(join(folder, 'secrets', role), 'utf8').trim()
    const client = new Client({ host: '127.0.0.1', port, user: role, password, database: 'linewright' })
    await client.connect()
    return client
  }

  it('carries the major version in its name', () => {
    expect(readFileSync(join(folder, 'data/PG_VERSION'), 'utf8').trim()).toBe(String(major))
  })

  it('listens on loopback only, without a socket file', async () => {
    const client = await connect('linewright_cluster')
    const { rows } = await client.query(
      "select current_setting('listen_addresses') as addresses, current_setting('unix_socket_directories') as sockets",
    )
    await client.end()
    expect(rows).toEqual([{ addresses: '127.0.0.1', sockets: '' }])
  })

  it('keeps its passwords in files that only their owner reads, and trusts nobody', async () => {
    const names = readdirSync(join(folder, 'secrets'))
    expect(names.sort()).toEqual(['linewright', 'linewright_cluster', 'linewright_owner'])
    for (const name of names) expect(statSync(join(folder, 'secrets', name)).mode & 0o777).toBe(0o600)
    expect(statSync(join(folder, 'data')).mode & 0o777).toBe(0o700)
    const wrong = new Client({ host: '127.0.0.1', port, user: 'linewright', password: 'x', database: 'linewright' })
    await expect(wrong.connect()).rejects.toThrow(/password authentication failed/)
    const rules = readFileSync(join(folder, 'data/pg_hba.conf'), 'utf8').split('\n')
    const methods = rules.filter((line) => /^(local|host)/.test(line)).map((line) => line.split(/\s+/).at(-1))
    expect(new Set(methods)).toEqual(new Set(['scram-sha-256']))
  })

  it('runs as an account without privileges', async () => {
    const pid = Number(readFileSync(join(folder, 'data/postmaster.pid'), 'utf8').split('\n')[0])
    expect(statSync(`/proc/${pid}`).uid).not.toBe(0)
  })

  it('gives the application a role that owns nothing and bypasses nothing', async () => {
    const client = await connect('linewright')
    const { rows } = await client.query(
      `select rolsuper, rolcreaterole, rolcreatedb, rolbypassrls, rolreplication,
              (select pg_get_userbyid(datdba) from pg_database where datname = current_database()) as owner,
              has_database_privilege('linewright', 'CREATE') as may_make_schemas,
              has_schema_privilege('public', 'CREATE') as may_make_tables
       from pg_roles where rolname = current_user`,
    )
    await client.end()
    expect(rows).toEqual([
      {
        rolsuper: false,
        rolcreaterole: false,
        rolcreatedb: false,
        rolbypassrls: false,
        rolreplication: false,
        owner: 'linewright_owner',
        may_make_schemas: true,
        may_make_tables: false,
      },
    ])
  })

  it('keeps its data and its port over a restart', async () => {
    const before = await connect('linewright_owner')
    await before.query('create table kept as select 42 as answer')
    await before.end()
    expect(command(data, ['stop']).text).toContain('stopped')
    expect(command(data, ['status'])).toMatchObject({ code: 3 })
    expect(portIn(command(data, ['start']).text)).toBe(port)
    const after = await connect('linewright_owner')
    expect((await after.query('select answer from kept')).rows).toEqual([{ answer: 42 }])
    await after.end()
  })

  it('moves to another port when its own is taken', async () => {
    command(data, ['stop'])
    const other = await listenOn(port)
    const moved = portIn(command(data, ['start']).text)
    await new Promise((resolve) => other.close(resolve))
    expect(moved).not.toBe(port)
    port = moved
    const client = await connect('linewright')
    await client.end()
  })

  it('recovers after its server was killed', async () => {
    const pid = Number(readFileSync(join(folder, 'data/postmaster.pid'), 'utf8').split('\n')[0])
    process.kill(pid, 'SIGKILL')
    const { code, text } = command(data, ['start'])
    expect(code).toBe(0)
    port = portIn(text)
    const client = await connect('linewright_owner')
    expect((await client.query('select answer from kept')).rows).toEqual([{ answer: 42 }])
    await client.end()
  })

  it('writes a dump and reads it into a fresh cluster', () => {
    const dump = join(data, 'all.dump')
    expect(command(data, ['dump', dump]).code).toBe(0)
    const fresh = makeDataFolder(0o755)
    try {
      const { code, text } = command(fresh, ['restore', dump])
      expect(text).not.toMatch(/error/i)
      expect(code).toBe(0)
      expect(command(fresh, ['psql', '-Atc', 'select answer from kept']).text).toContain('42')
      expect(command(fresh, ['restore', dump]).text).toMatch(/already holds 1 tables; expected an empty one/)
    } finally {
      command(fresh, ['stop'])
      rmSync(fresh, { recursive: true, force: true })
    }
  })
})

describe('a checkout in a private home', () => {
  const data = makeDataFolder(0o700)
  let place = ''

  afterAll(() => {
    command(data, ['stop'])
    if (place.startsWith('/var/lib/linewright/')) rmSync(join(place, '..'), { recursive: true, force: true })
    rmSync(data, { recursive: true, force: true })
  })

  it('has its cluster where the server account can reach it', () => {
    const { code, text } = command(data, ['start'])
    const major = Number(/PostgreSQL (\d+) on/.exec(text)?.[1])
    place = realpathSync(join(data, `postgres-${major}`))
    expect(code).toBe(0)
    // Started by root, the server runs as another account, which cannot enter a folder of mode 700.
    if (process.getuid?.() === 0) expect(place).toMatch(/^\/var\/lib\/linewright\//)
    else expect(place.startsWith(realpathSync(data))).toBe(true)
    expect(command(data, ['psql', '-Atc', 'select 41 + 1']).text).toContain('42')
    expect(command(data, ['stop']).text).toContain('stopped')
  })
})

describe('data of another major version', () => {
  const data = makeDataFolder(0o755)
  const old = join(data, 'postgres-9/data')
  mkdirSync(old, { recursive: true })
  writeFileSync(join(old, 'PG_VERSION'), '9\n')
  writeFileSync(join(old, 'precious'), 'rows')

  afterAll(() => {
    command(data, ['stop'], { PG_FRESH: '1' })
    rmSync(data, { recursive: true, force: true })
  })

  it('stops the start, names the folder and the way over', () => {
    const { code, text } = command(data, ['start'])
    expect(code).toBe(1)
    expect(text).toContain(join(data, 'postgres-9'))
    expect(text).toMatch(/belongs to PostgreSQL 9; this machine offers PostgreSQL \d+/)
    expect(text).toMatch(/pg\.mjs dump/)
    expect(text).toMatch(/pg\.mjs restore/)
    expect(readdirSync(data)).toEqual(['postgres-9'])
  })

  it('stays untouched when a fresh cluster is asked for', () => {
    expect(command(data, ['start'], { PG_FRESH: '1' }).code).toBe(0)
    expect(readdirSync(old).sort()).toEqual(['PG_VERSION', 'precious'])
    expect(readFileSync(join(old, 'precious'), 'utf8')).toBe('rows')
    expect(existsSync(join(data, 'postgres-9/secrets'))).toBe(false)
  })

  it('is refused in a folder given by name as well', () => {
    const { code, text } = command(data, ['start'], { PG_DIR: join(data, 'postgres-9') })
    expect(code).toBe(1)
    expect(text).toMatch(/belongs to PostgreSQL 9/)
  })
})
