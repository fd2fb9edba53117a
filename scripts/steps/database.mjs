import { openDatabase } from '../pg.mjs'
import { importCompiled } from './compile.mjs'

/** Opens the product's database and brings its schema up to date. Answers its addresses. */
export const prepareDatabase = async () => {
  const addresses = await openDatabase()
  const { migrateDatabase } = await importCompiled('server/database/migrate.ts', 'migrate')
  const role = decodeURIComponent(new URL(addresses.DATABASE_URL).username)
  await migrateDatabase(addresses.DATABASE_OWNER_URL, role)
  return addresses
}

/** Number of demo accounts in a migrated database. */
export const countDemoAccounts = async (databaseUrl) => {
  const { default: pg } = await import('pg')
  const client = new pg.Client({ connectionString: databaseUrl, connectionTimeoutMillis: 10_000 })
  client.on('error', () => undefined)
  await client.connect()
  try {
    const { rows } = await client.query(
      "select exists (select from information_schema.tables where table_schema = 'public' and table_name = 'users') as made",
    )
    if (!rows[0].made) return 0
    const answer = await client.query('select count(*)::int as accounts from users where is_demo')
    return answer.rows[0].accounts
  } finally {
    await client.end()
  }
}
