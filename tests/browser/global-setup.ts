import { mkdtempSync, rmSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { TestProject } from 'vitest/node'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { migrateDatabase } from '../../server/database/migrate'
import { startServer } from '../support/server'

declare module 'vitest' {
  interface ProvidedContext {
    /** What another server needs to stand in for this one: database, secret and files. */
    serverEnvironment: Record<string, string>
  }
}

/** One database and one built server for all files of this project; each file brings its own people and groups. */
export default async function setup(project: TestProject) {
  const folder = mkdtempSync(join(tmpdir(), 'linewright-browser-'))
  const name = `test_browser_${randomBytes(6).toString('hex')}`
  const addresses = await createDatabase(name, { unsafeFast: true })
  await migrateDatabase(addresses.DATABASE_OWNER_URL, new URL(addresses.DATABASE_URL).username)
  const env = {
    DATABASE_URL: addresses.DATABASE_URL,
    NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
    NUXT_STORAGE_DIR: join(folder, 'files'),
  }
  const server = await startServer({ env })
  project.provide('baseUrl', server.baseUrl)
  project.provide('databaseUrl', addresses.DATABASE_URL)
  project.provide('serverEnvironment', env)
  return async () => {
    await server.stop()
    await dropDatabase(name)
    rmSync(folder, { recursive: true, force: true })
  }
}
