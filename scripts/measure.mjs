/**
 * `npm run measure`: what a person waits for. Cold start of the built server until it is ready (median of five, with a
 * database that is up), and the script of the first page, gzipped, as the browser is told to load it.
 */
import { spawn } from 'node:child_process'
import { randomBytes } from 'node:crypto'
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { loadavg, tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { gzipSync } from 'node:zlib'
import { createDatabase, dropDatabase } from './pg.mjs'
import { freePort } from './postgres/port.mjs'
import { answersAt } from './steps/address.mjs'
import { ensureBuilt } from './steps/build.mjs'
import { importCompiled } from './steps/compile.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inProject } from './steps/paths.mjs'

const targets = { coldStartSeconds: 3, firstPageBytes: 350_000 }

const startOnce = async (env) => {
  const port = await freePort()
  const baseUrl = `http://127.0.0.1:${port}`
  const since = performance.now()
  const child = spawn(process.execPath, [inProject('.output/server/index.mjs')], {
    env: { ...process.env, ...env, PORT: String(port), NUXT_BASE_URL: baseUrl },
    stdio: 'ignore',
  })
  const ended = new Promise((resolve) => child.once('exit', resolve))
  try {
    while (!(await answersAt(baseUrl))) {
      if (child.exitCode !== null || performance.now() - since > 60_000) throw new Error('the server did not start')
      await pause(10)
    }
    const seconds = (performance.now() - since) / 1000
    const shell = await (await fetch(baseUrl)).text()
    return { seconds, shell }
  } finally {
    child.kill('SIGTERM')
    await ended
  }
}

/** Scripts that the shell loads or announces, and what they import statically, once each. */
const scriptsOf = (shell) => {
  const seen = new Set()
  const visit = (name) => {
    if (seen.has(name)) return
    seen.add(name)
    const text = readFileSync(inProject('.output/public/_nuxt', name), 'utf8')
    for (const [, next] of text.matchAll(/(?:from|import)\s*["']\.\/([\w-]+\.js)["']/g)) visit(next)
  }
  for (const [, name] of shell.matchAll(/(?:src|href)="\/_nuxt\/([\w-]+\.js)"/g)) visit(name)
  return [...seen]
}

export const measure = async () => {
  await ensureInstalled()
  await ensureBuilt()
  const name = `measure_${randomBytes(6).toString('hex')}`
  const folder = mkdtempSync(join(tmpdir(), 'measure-'))
  const { DATABASE_URL, DATABASE_OWNER_URL } = await createDatabase(name)
  try {
    const { migrateDatabase } = await importCompiled('server/database/migrate.ts', 'migrate')
    await migrateDatabase(DATABASE_OWNER_URL, decodeURIComponent(new URL(DATABASE_URL).username))
    const env = {
      NODE_ENV: 'production',
      HOST: '127.0.0.1',
      DATABASE_URL,
      NUXT_STORAGE_DIR: folder,
      NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
      LOG_LEVEL: 'error',
    }
    const starts = []
    for (let turn = 0; turn < 5; turn += 1) starts.push(await startOnce(env))
    const seconds = starts.map((start) => start.seconds).sort((a, b) => a - b)
    const scripts = scriptsOf(starts[0].shell)
    const sizes = scripts.map(
      (file) => gzipSync(readFileSync(inProject('.output/public/_nuxt', file)), { level: 9 }).length,
    )
    return { coldStartSeconds: seconds[2], starts: seconds, firstPageBytes: sizes.reduce((a, b) => a + b, 0), scripts }
  } finally {
    await dropDatabase(name)
    rmSync(folder, { recursive: true, force: true })
  }
}

const found = await measure()
console.log(`load ${loadavg()[0].toFixed(2)}`)
console.log(
  `cold start of the built server, median of five: ${found.coldStartSeconds.toFixed(2)} s (below ${targets.coldStartSeconds} s wanted; ${found.starts.map((value) => value.toFixed(2)).join(', ')})`,
)
console.log(
  `script of the first page, gzip: ${(found.firstPageBytes / 1000).toFixed(0)} kB in ${found.scripts.length} files (below ${targets.firstPageBytes / 1000} kB wanted)`,
)
if (found.coldStartSeconds >= targets.coldStartSeconds || found.firstPageBytes >= targets.firstPageBytes)
  process.exitCode = 1
