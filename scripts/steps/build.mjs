import { createHash } from 'node:crypto'
import { existsSync, mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { withLock } from '../postgres/lock.mjs'
import { inCache, inProject } from './paths.mjs'
import { installed, run } from './run.mjs'

const inputs = [
  ...['app', 'server', 'shared', 'workers', 'drizzle', 'public'],
  ...['nuxt.config.ts', 'tailwind.config.ts', 'package-lock.json'],
  ...['scripts/nuxt-server-extras.ts', 'scripts/bundle-workers.mjs', 'scripts/kernel'],
]

const filesBelow = (path) => {
  if (!existsSync(path)) return []
  if (!statSync(path).isDirectory()) return [path]
  return readdirSync(path)
    .sort()
    .flatMap((name) => filesBelow(join(path, name)))
}

/** SHA-256 over everything the build reads: names, bytes and the Node version. */
export const hashInputs = () => {
  const hash = createHash('sha256').update(process.versions.node.split('.')[0])
  for (const file of inputs.flatMap((name) => filesBelow(inProject(name)))) {
    hash.update(`\0${file}\0`).update(readFileSync(file))
  }
  return hash.digest('hex')
}

const stamp = () => inProject('.output/inputs.sha256')

const isCurrent = (wanted) => {
  const built = existsSync(inProject('.output/server/index.mjs')) && existsSync(stamp())
  return built && readFileSync(stamp(), 'utf8').trim() === wanted
}

/** Builds the application when its sources changed since the last build. Answers whether it built. */
export const ensureBuilt = async () => {
  mkdirSync(inCache(), { recursive: true })
  return withLock(inCache('build.lock'), { patienceMs: 15 * 60_000 }, async () => {
    const wanted = hashInputs()
    if (isCurrent(wanted)) return false
    console.log('Building the application (about a minute) ...')
    // NODE_ENV of the caller must not leak in: with "test" or "development" the bundler would keep development code.
    const env = { NODE_ENV: 'production', NUXT_TELEMETRY_DISABLED: '1' }
    await run(installed('nuxt'), ['build', '--logLevel', 'silent'], { env })
    if (!existsSync(inProject('.output/server/index.mjs')))
      throw new Error('nuxt build left no .output/server/index.mjs')
    writeFileSync(stamp(), `${wanted}\n`)
    return true
  })
}
