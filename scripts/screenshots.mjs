/**
 * `npm run screenshots`: pictures of every page at 1440 and 390 px in the light and the dark theme, of a fresh database
 * with the demo, in .data/screenshots. With `--readme` the few pictures of README.md are taken as well.
 */
import { spawn } from 'node:child_process'
import { randomBytes } from 'node:crypto'
import { existsSync, mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { installPackages } from './debian.mjs'
import { createDatabase, dropDatabase } from './pg.mjs'
import { freePort } from './postgres/port.mjs'
import { waitUntilReady } from './steps/address.mjs'
import { ensureBuilt } from './steps/build.mjs'
import { importCompiled } from './steps/compile.mjs'
import { loadDemo } from './steps/demo.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inData, inProject } from './steps/paths.mjs'

await ensureInstalled()
if (!existsSync('/usr/bin/chromium')) installPackages(['chromium'], 'Taking pictures')
await ensureBuilt()
const name = `pictures_${randomBytes(6).toString('hex')}`
const folder = mkdtempSync(join(tmpdir(), 'pictures-'))
const { DATABASE_URL, DATABASE_OWNER_URL } = await createDatabase(name)
let server
try {
  const { migrateDatabase } = await importCompiled('server/database/migrate.ts', 'migrate')
  await migrateDatabase(DATABASE_OWNER_URL, decodeURIComponent(new URL(DATABASE_URL).username))
  const port = await freePort()
  const baseUrl = `http://127.0.0.1:${port}`
  const env = {
    DATABASE_URL,
    HOST: '127.0.0.1',
    PORT: String(port),
    NODE_ENV: 'production',
    NUXT_BASE_URL: baseUrl,
    NUXT_STORAGE_DIR: join(folder, 'files'),
    NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
    LOG_LEVEL: 'warn',
  }
  const { accounts } = await loadDemo(env)
  server = spawn(process.execPath, [inProject('.output/server/index.mjs')], {
    env: { ...process.env, ...env },
    stdio: ['ignore', 'ignore', 'inherit'],
  })
  await waitUntilReady(baseUrl, new Promise((resolve) => server.once('exit', resolve)))
  const { takePictures } = await importCompiled('tests/browser/take-pictures.ts', 'pictures')
  const target = inData('screenshots')
  const complaints = await takePictures({
    baseUrl,
    account: accounts.find(({ role }) => role === 'owner'),
    folder: target,
    readmeFolder: process.argv.includes('--readme') ? inProject('tests/browser/pictures') : null,
  })
  console.log(`Pictures of every page: ${target}`)
  for (const complaint of complaints) console.error(complaint)
  process.exitCode = complaints.length === 0 ? 0 : 1
} finally {
  if (server) {
    const ended = new Promise((resolve) => server.once('exit', resolve))
    server.kill('SIGTERM')
    await ended
  }
  await dropDatabase(name)
  rmSync(folder, { recursive: true, force: true })
}
