import { drizzle } from 'drizzle-orm/node-postgres'
import { migrate } from 'drizzle-orm/node-postgres/migrator'
import { Client } from 'pg'
import { findMigrations, readJournal, type Migration } from './journal'

/** Any number that nothing else in this database uses. Session lock, so it dies with the connection. */
const lockKey = 4_318_620_217

const readApplied = async (client: Client): Promise<{ hash: string; when: number }[]> => {
  const made = await client.query<{ made: boolean }>(
    `select to_regclass('drizzle.__drizzle_migrations') is not null as made`,
  )
  if (!made.rows[0]?.made) return []
  const { rows } = await client.query<{ hash: string; created_at: string }>(
    'select hash, created_at from drizzle.__drizzle_migrations order by created_at, id',
  )
  return rows.map((row) => ({ hash: row.hash, when: Number(row.created_at) }))
}

/** What was applied must be the beginning of the journal, file for file; anything else is not ours to change. */
const checkApplied = (applied: { hash: string; when: number }[], journal: Migration[]): void => {
  if (applied.length > journal.length) {
    throw new Error(
      `database: expected at most the ${journal.length} migrations of this version; found ${applied.length}. It belongs to a newer version; install that one.`,
    )
  }
  applied.forEach((row, index) => {
    const expected = journal[index]
    if (!expected || row.when !== expected.when || row.hash !== expected.hash) {
      throw new Error(
        `database: expected migration ${index + 1} to be ${expected?.tag} as it is in drizzle/; found another one applied. An applied migration was edited or replaced: restore its file.`,
      )
    }
  })
}

const quote = (name: string): string => `"${name.replaceAll('"', '""')}"`

/** The application role reads and writes rows; it owns nothing, so it can neither change tables nor lift the fences. */
const grant = async (client: Client, applicationRole: string): Promise<void> => {
  const { rows } = await client.query<{ owner: string }>('select current_user as owner')
  if (rows[0]?.owner === applicationRole) return
  const role = quote(applicationRole)
  await client.query(`
    grant usage on schema public, drizzle to ${role};
    grant select, insert, update, delete on all tables in schema public to ${role};
    grant usage, select on all sequences in schema public to ${role};
    grant select on drizzle.__drizzle_migrations to ${role};
  `)
}

const connect = async (ownerUrl: string): Promise<Client> => {
  const client = new Client({
    connectionString: ownerUrl,
    application_name: 'linewright migrate',
    connectionTimeoutMillis: 10_000,
    // Waiting for another start, or rewriting a large table, may take as long as it takes.
    statement_timeout: 0,
    keepAlive: true,
  })
  // A lost connection also rejects the query that was running; without a listener it would end the process instead.
  client.on('error', () => undefined)
  await client.connect()
  return client
}

/**
 * Brings the schema up to date. Any number of processes may start at once: one applies each migration, the others wait
 * for it and find nothing to do. All of it happens on one connection, which holds the lock.
 */
export const migrateDatabase = async (
  ownerUrl: string,
  applicationRole: string,
  options: { folder?: string } = {},
): Promise<{ applied: number; total: number }> => {
  const folder = options.folder ?? findMigrations()
  const journal = await readJournal(folder)
  const client = await connect(ownerUrl)
  try {
    await client.query('select pg_advisory_lock($1)', [lockKey])
    const before = await readApplied(client)
    checkApplied(before, journal)
    await migrate(drizzle(client), { migrationsFolder: folder })
    const after = await readApplied(client)
    checkApplied(after, journal)
    if (after.length !== journal.length) {
      throw new Error(`database: expected ${journal.length} applied migrations; found ${after.length}`)
    }
    await grant(client, applicationRole)
    return { applied: after.length - before.length, total: after.length }
  } finally {
    await client.end().catch(() => undefined)
  }
}
