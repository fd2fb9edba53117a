import { randomUUID } from 'node:crypto'
import { mkdir, rm } from 'node:fs/promises'
import { join, resolve } from 'node:path'
import { build } from 'esbuild'
import { Pool } from 'pg'
import { createDatabase, dropDatabase } from '../../../scripts/pg.mjs'
import { migrateDatabase } from '../../../server/database/migrate'
import { contentHash } from '../../../shared/utils/canonical'
import { ParameterSetSchema, type ParameterSetInput } from '../../../shared/schemas/parameter-set'

const root = resolve(import.meta.dirname, '../../..')

/** A database of its own for one test file, migrated, with people, groups and sets written straight into it. */
export interface Workbench {
  databaseUrl: string
  /** Tables outside the groups, with the rights of the application. */
  sql: <Row = Record<string, unknown>>(text: string, values?: unknown[]) => Promise<Row[]>
  addUser: (name: string) => Promise<string>
  addGroup: (userId: string) => Promise<string>
  addMember: (groupId: string, userId: string, role: string) => Promise<void>
  addSet: (groupId: string, userId: string, change?: Partial<ParameterSetInput>) => Promise<string>
  /** A set whose computation behaves as the label says (see the trial thread). */
  addTrial: (groupId: string, userId: string, behaviour: string) => Promise<string>
  close: () => Promise<void>
}

/** Row level security hides every row unless the group is named. */
const inGroup = async (pool: Pool, groupId: string, text: string, values: unknown[]) => {
  const client = await pool.connect()
  try {
    await client.query('begin')
    await client.query(`select set_config('app.group_id', $1, true)`, [groupId])
    const { rows } = await client.query<{ id: string }>(text, values)
    await client.query('commit')
    return rows
  } finally {
    client.release(true)
  }
}

export const openWorkbench = async (): Promise<Workbench> => {
  const name = `jobs_${randomUUID().replaceAll('-', '').slice(0, 12)}`
  const { DATABASE_URL, DATABASE_OWNER_URL } = await createDatabase(name)
  await migrateDatabase(DATABASE_OWNER_URL, decodeURIComponent(new URL(DATABASE_URL).username), {
    folder: join(root, 'drizzle'),
  })
  const pool = new Pool({ connectionString: DATABASE_URL, max: 5 })
  pool.on('error', () => undefined)
  let count = 0

  const bench: Workbench = {
    databaseUrl: DATABASE_URL,
    sql: async <Row>(text: string, values: unknown[] = []) => (await pool.query(text, values)).rows as Row[],
    addUser: async (userName) => {
      const values = [`${userName.toLowerCase()}-${randomUUID()}@example.org`, userName]
      const [row] = await bench.sql<{ id: string }>(
        `insert into users (email, name, password_hash) values ($1, $2, '-') returning id`,
        values,
      )
      return row!.id
    },
    addGroup: async (userId) => {
      const [row] = await bench.sql<{ id: string }>(
        `insert into groups (name, created_by) values ($1, $2) returning id`,
        [`Group ${++count}`, userId],
      )
      await bench.addMember(row!.id, userId, 'owner')
      return row!.id
    },
    addMember: async (groupId, userId, role) => {
      await bench.sql(`insert into memberships (group_id, user_id, role) values ($1, $2, $3)`, [groupId, userId, role])
    },
    addSet: async (groupId, userId, change = {}) => {
      const parameters = ParameterSetSchema.parse({
        zeroPhononEnergyMeV: 2000 + ++count / 1024,
        zeroPhononFwhmMeV: 1,
        temperaturesK: [4],
        waitingTimesPs: [0],
        ...change,
      })
      const [set] = await inGroup(
        pool,
        groupId,
        `insert into parameter_sets (group_id, name, created_by) values ($1, $2, $3) returning id`,
        [groupId, `Set ${count}`, userId],
      )
      await inGroup(
        pool,
        groupId,
        `insert into parameter_set_versions (group_id, set_id, version, parameters, content_hash, created_by)
         values ($1, $2, 1, $3, $4, $5)`,
        [groupId, set?.id, JSON.stringify(parameters), contentHash(parameters), userId],
      )
      if (!set) throw new Error('expected the new set')
      return set.id
    },
    addTrial: (groupId, userId, behaviour) =>
      bench.addSet(groupId, userId, { modes: [{ label: behaviour, energyMeV: 5, huangRhys: 0.1 }] }),
    close: async () => {
      await pool.end()
      await dropDatabase(name)
    },
  }
  return bench
}

/** Compiles the trial thread; answers the folder for WORKERS_DIR. */
export const compileTrialWorkers = async (): Promise<{ directory: string; remove: () => Promise<void> }> => {
  const directory = join(root, '.data', `trial-workers-${randomUUID().slice(0, 8)}`)
  await mkdir(directory, { recursive: true })
  await build({
    entryPoints: [join(root, 'tests/fixtures/workers/simulate.ts')],
    outdir: directory,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    outExtension: { '.js': '.mjs' },
  })
  return { directory, remove: () => rm(directory, { recursive: true, force: true }) }
}

/** Asks until the answer satisfies, so that no test waits longer than it must; fails with the last answer. */
export const until = async <T>(
  ask: () => Promise<T> | T,
  satisfies: (answer: T) => boolean,
  limitMs = 60_000,
): Promise<T> => {
  const begun = performance.now()
  for (;;) {
    const answer = await ask()
    if (satisfies(answer)) return answer
    if (performance.now() - begun > limitMs) {
      throw new Error(`waited ${limitMs} ms in vain; last answer: ${JSON.stringify(answer)}`)
    }
    await new Promise((resolve) => setTimeout(resolve, 40))
  }
}
