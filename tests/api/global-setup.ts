import { appendFileSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { TestProject } from 'vitest/node'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { migrateDatabase } from '../../server/database/migrate'
import { startServer } from '../support/server'

declare module 'vitest' {
  interface ProvidedContext {
    baseUrl: string
    /** Application role: what the server itself is. */
    databaseUrl: string
    ownerUrl: string
    /** Everything the server wrote, one JSON object a line. */
    logFile: string
    sessionPassword: string
    storageDir: string
  }
}

/** One database and one built server for all files of this project; each file brings its own people and groups. */
export default async function setup(project: TestProject) {
  const folder = mkdtempSync(join(tmpdir(), 'linewright-api-'))
  const name = `test_api_${randomBytes(6).toString('hex')}`
  const addresses = await createDatabase(name, { unsafeFast: true })
  await migrateDatabase(addresses.DATABASE_OWNER_URL, new URL(addresses.DATABASE_URL).username)
  const sessionPassword = randomBytes(32).toString('base64url')
  const storageDir = join(folder, 'files')
  mkdirSync(storageDir)
  const logFile = join(folder, 'server.log')
  writeFileSync(logFile, '')
  const server = await startServer({
    env: {
      DATABASE_URL: addresses.DATABASE_URL,
      NUXT_SESSION_PASSWORD: sessionPassword,
      NUXT_STORAGE_DIR: storageDir,
      LOG_LEVEL: 'debug',
    },
    onOutput: (text) => appendFileSync(logFile, text),
  })
  project.provide('baseUrl', server.baseUrl)
  project.provide('databaseUrl', addresses.DATABASE_URL)
  project.provide('ownerUrl', addresses.DATABASE_OWNER_URL)
  project.provide('logFile', logFile)
  project.provide('sessionPassword', sessionPassword)
  project.provide('storageDir', storageDir)
  return async () => {
    const crashed = server.process.exitCode !== null || /"event":"process\.(uncaught|unhandled)/.test(server.output())
    await server.stop()
    await dropDatabase(name)
    rmSync(folder, { recursive: true, force: true })
    // Whatever the tests sent, the server must have outlived it.
    if (crashed) throw new Error(`the server did not survive the tests:\n${server.output().slice(-4000)}`)
  }
}
