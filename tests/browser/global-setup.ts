import { mkdtempSync, rmSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { TestProject } from 'vitest/node'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { migrateDatabase } from '../../server/database/migrate'
import { loadDemo } from '../../scripts/steps/demo.mjs'
import { startServer } from '../support/server'

declare module 'vitest' {
  interface ProvidedContext {
    /** What another server needs to stand in for this one: database, secret and files. */
    serverEnvironment: Record<string, string>
    /** An account of the demo group. */
    demoEmail: string
    demoPassword: string
  }
}

/** One database with the demo and one built server for all files of this project. */
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
  const demo = await loadDemo(env)
  const owner = demo.accounts.find(({ role }) => role === 'owner')
  if (!owner) throw new Error('the demo has no owner')
  const server = await startServer({ env })
  project.provide('baseUrl', server.baseUrl)
  project.provide('databaseUrl', addresses.DATABASE_URL)
  project.provide('serverEnvironment', env)
  project.provide('demoEmail', owner.email)
  project.provide('demoPassword', owner.password)
  return async () => {
    await server.stop()
    await dropDatabase(name)
    rmSync(folder, { recursive: true, force: true })
  }
}
