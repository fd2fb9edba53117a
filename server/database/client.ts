import { drizzle, type NodePgDatabase } from 'drizzle-orm/node-postgres'
import { Pool } from 'pg'
import { logger } from '../utils/logger'
import { assertNoOpenTransaction } from './open-transaction'
import * as schema from './schema'

/** Queries only: transactions go through `withTransaction` and `withGroup`, which cannot leak a client. */
export type Queries = Omit<NodePgDatabase<typeof schema>, 'transaction' | '$client'>

/** Milliseconds. PostgreSQL has no limits of its own by default; the client's limit also ends waits on a dead network. */
export const databaseLimits = {
  connect: 5000,
  statement: 15_000,
  idleInTransaction: 30_000,
  query: 20_000,
} as const

let pool: Pool | undefined
let database: Queries | undefined

const connectionString = (): string => {
  const url = process.env.DATABASE_URL
  if (!url) throw new Error('DATABASE_URL: expected the address of the database (postgres://...); found nothing')
  return url
}

/** The one pool of this process. */
export const getPool = (): Pool => {
  if (pool) return pool
  pool = new Pool({
    connectionString: connectionString(),
    max: Number(process.env.DATABASE_POOL_SIZE ?? 10),
    application_name: 'linewright',
    connectionTimeoutMillis: databaseLimits.connect,
    idleTimeoutMillis: 30_000,
    statement_timeout: databaseLimits.statement,
    idle_in_transaction_session_timeout: databaseLimits.idleInTransaction,
    query_timeout: databaseLimits.query,
    keepAlive: true,
  })
  // An idle client whose server goes away emits here; without a listener that ends the process.
  pool.on('error', (error) => logger.warn({ event: 'database.idle-client-lost', reason: error.message }))
  return pool
}

/** Tables outside the groups: accounts, sessions, groups, memberships, attempts. Refuses inside an open transaction. */
export const getDatabase = (): Queries => {
  assertNoOpenTransaction()
  database ??= drizzle(getPool(), { schema })
  return database
}

export const closePool = async (): Promise<void> => {
  const closing = pool
  pool = undefined
  database = undefined
  await closing?.end()
}
