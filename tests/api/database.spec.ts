import { eq, sql as text } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { parameterSets, users } from '../../server/database/schema'
import { sqlAs, sql } from './support/database'
import { startProxy } from './support/proxy'
import { makers } from './support/objects'
import { createGroup, register, type Person } from './support/people'

/** The server's own modules in this process, with a small pool and a wire that can be cut. */
const load = async () => {
  const { closePool, getDatabase, getPool } = await import('../../server/database/client')
  const { withTransaction } = await import('../../server/database/transaction')
  const { withGroup } = await import('../../server/database/with-group')
  return { closePool, getDatabase, getPool, withTransaction, withGroup }
}

let database: Awaited<ReturnType<typeof load>>
let proxy: Awaited<ReturnType<typeof startProxy>>
let person: Person
let groupId: string
const poolSize = 4

beforeAll(async () => {
  const url = new URL(inject('databaseUrl'))
  proxy = await startProxy({ host: url.hostname, port: Number(url.port) })
  url.port = String(proxy.port)
  process.env.DATABASE_URL = url.href
  process.env.DATABASE_POOL_SIZE = String(poolSize)
  process.env.LOG_LEVEL = 'silent'
  database = await load()
  person = await register('Database Person')
  groupId = await createGroup(person, 'Database')
  await makers.setId?.({ groupId, owner: person })
})

afterAll(async () => {
  await database.closePool()
  await proxy.close()
})

const idle = () => database.getPool().totalCount - database.getPool().idleCount
const expectAllReturned = () => expect([idle(), database.getPool().waitingCount]).toEqual([0, 0])

const countSets = (tx: Parameters<Parameters<typeof database.withGroup>[1]>[0]) => tx.$count(parameterSets)

describe('withGroup', () => {
  it('sees its group, and nothing once it is over', async () => {
    expect(await database.withGroup(groupId, countSets)).toBe(1)
    expect(await database.withGroup(crypto.randomUUID(), countSets)).toBe(0)
    expect(await database.withTransaction(countSets)).toBe(0)
    expect(await database.getDatabase().$count(parameterSets)).toBe(0)
    expectAllReturned()
  })

  it('takes back everything when the work fails', async () => {
    const failing = database.withGroup(groupId, async (tx) => {
      await tx.insert(parameterSets).values({ groupId, name: 'Never there', createdBy: person.id })
      throw new Error('planted')
    })
    await expect(failing).rejects.toThrow('planted')
    const rows = await sql(`select 1 from parameter_sets where name = 'Never there'`, [], groupId)
    expect(rows).toEqual([])
    expectAllReturned()
  })

  it('refuses a second client inside, where a full pool would wait for itself for ever', async () => {
    const inside = /expected every query of a transaction to use its own handle/
    await expect(database.withGroup(groupId, async () => database.getDatabase())).rejects.toThrow(inside)
    await expect(database.withGroup(groupId, () => database.withTransaction(async () => 1))).rejects.toThrow(inside)
    expectAllReturned()
  })

  it('lets no query through a handle that outlived it', async () => {
    let kept: Parameters<typeof countSets>[0] | undefined
    await database.withGroup(groupId, async (tx) => {
      kept = tx
    })
    if (!kept) throw new Error('expected the handle')
    await expect(countSets(kept)).rejects.toThrow(/after its end|Failed query/)
    expectAllReturned()
  })
})

describe('the pool', () => {
  it('gets every client back when BEGIN fails twenty times', async () => {
    const clients = await Promise.all(Array.from({ length: poolSize }, () => database.getPool().connect()))
    const broken = clients.map((client) => {
      const query = client.query
      client.query = ((first: unknown, ...rest: unknown[]) =>
        first === 'begin'
          ? Promise.reject(new Error('planted'))
          : Reflect.apply(query, client, [first, ...rest])) as typeof query
      client.release()
      return () => (client.query = query)
    })
    for (let index = 0; index < 20; index++) {
      await expect(database.withGroup(groupId, countSets)).rejects.toThrow('planted')
    }
    for (const mend of broken) mend()
    expectAllReturned()
    expect(await database.withGroup(groupId, countSets)).toBe(1)
  })

  it('serves four times its size at once, and says no within its limit when it is held', async () => {
    const many = Array.from({ length: 4 * poolSize }, () => database.withGroup(groupId, countSets))
    expect(new Set(await Promise.all(many))).toEqual(new Set([1]))
    const held = await Promise.all(Array.from({ length: poolSize }, () => database.getPool().connect()))
    const started = performance.now()
    await expect(database.withGroup(groupId, countSets)).rejects.toThrow(/timeout exceeded/)
    expect(performance.now() - started).toBeLessThan(10_000)
    for (const client of held) client.release()
    expectAllReturned()
  })

  it('outlives clients that are lost idle, between two queries and within one', async () => {
    await database.withGroup(groupId, countSets)
    proxy.cut()
    proxy.mend()
    await new Promise((done) => setTimeout(done, 50))
    const between = database.withTransaction(async (tx) => {
      await tx.execute(text`select 1`)
      proxy.cut()
      proxy.mend()
      await new Promise((done) => setTimeout(done, 50))
      await tx.execute(text`select 1`)
    })
    await expect(between).rejects.toThrow()
    const within = database.withTransaction(async (tx) => {
      setTimeout(() => {
        proxy.cut()
        proxy.mend()
      }, 50)
      await tx.execute(text`select pg_sleep(5)`)
    })
    await expect(within).rejects.toThrow()
    expectAllReturned()
    expect(await database.withGroup(groupId, countSets)).toBe(1)
  })

  it('knows an outage when it sees one', async () => {
    const { isDatabaseDown } = await import('../../server/database/outage')
    proxy.cut()
    const error: unknown = await database.withGroup(groupId, countSets).catch((failure: unknown) => failure)
    proxy.mend()
    expect(isDatabaseDown(error)).toBe(true)
    expect(isDatabaseDown(new Error('something else'))).toBe(false)
    expect(await database.getDatabase().$count(users, eq(users.id, person.id))).toBe(1)
  })

  it('carries the limits that PostgreSQL does not have by itself', async () => {
    const { rows } = await database
      .getPool()
      .query(
        `select name, setting from pg_settings where name in ('statement_timeout', 'idle_in_transaction_session_timeout')`,
      )
    expect(new Map(rows.map((row) => [row.name, row.setting]))).toEqual(
      new Map([
        ['statement_timeout', '15000'],
        ['idle_in_transaction_session_timeout', '30000'],
      ]),
    )
  })
})

describe('a database at its connection limit', () => {
  it('is an outage, not a fault', async () => {
    const { isDatabaseDown } = await import('../../server/database/outage')
    const failure = Object.assign(new Error('sorry, too many clients already'), { code: '53300' })
    expect(isDatabaseDown(new Error('Failed query', { cause: failure }))).toBe(true)
    await expect(sqlAs('postgres://nobody:x@127.0.0.1:1/none', 'select 1')).rejects.toThrow()
  })
})
