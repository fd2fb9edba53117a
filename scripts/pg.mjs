import { spawnSync } from 'node:child_process'
import { join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { clientEnvironment, findCluster, query, startCluster, stopCluster } from './postgres/cluster.mjs'
import { createDatabase, dropDatabase, openDatabase } from './postgres/database.mjs'

export { createDatabase, dropDatabase, openDatabase }
export const start = startCluster
export const stop = stopCluster
export const status = findCluster

const usage = `Private PostgreSQL of this checkout (folder .data/postgres-<major>, or PG_DIR).
  node scripts/pg.mjs start | stop | status
  node scripts/pg.mjs psql [arguments]     the database linewright as superuser
  node scripts/pg.mjs dump FILE            writes the database linewright (pg_dump, custom format)
  node scripts/pg.mjs restore FILE         reads such a dump into an empty database linewright`

const runClient = (cluster, program, args) => {
  const done = spawnSync(join(cluster.bin, program), args, {
    env: clientEnvironment(cluster, 'linewright'),
    stdio: 'inherit',
  })
  return done.status ?? 1
}

const describe = (cluster) => `PostgreSQL ${cluster.major} on 127.0.0.1:${cluster.port}, data in ${cluster.data}`

const commands = {
  start: async () => {
    await createDatabase('linewright')
    console.log(describe(findCluster()))
  },
  stop: async () => console.log(stopCluster() ? 'stopped' : 'was not running'),
  status: async () => {
    const cluster = findCluster()
    console.log(cluster ? describe(cluster) : 'not running')
    return cluster ? 0 : 3
  },
  psql: async (args) => {
    await createDatabase('linewright')
    return runClient(findCluster(), 'psql', args)
  },
  dump: async ([file]) => {
    if (!file) throw new Error('dump: expected the name of a file to write')
    return runClient(await startCluster(), 'pg_dump', ['-Fc', '-f', resolve(file)])
  },
  restore: async ([file]) => {
    if (!file) throw new Error('restore: expected the name of a dump')
    await createDatabase('linewright')
    const cluster = findCluster()
    const tables = query(cluster, 'linewright', "select count(*) from pg_tables where schemaname = 'public'")
    if (tables !== '0') throw new Error(`restore: the database already holds ${tables} tables; expected an empty one`)
    return runClient(cluster, 'pg_restore', ['--exit-on-error', '-d', 'linewright', resolve(file)])
  },
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const [name = '', ...rest] = process.argv.slice(2)
  try {
    if (!(name in commands)) throw new Error(usage)
    process.exitCode = (await commands[name](rest)) ?? 0
  } catch (error) {
    console.error(error.message)
    process.exitCode = 1
  }
}
