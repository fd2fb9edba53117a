import { existsSync, readFileSync } from 'node:fs'
import { ensureKernel } from '../build-kernel.mjs'
import { inProject } from './paths.mjs'
import { run } from './run.mjs'

const packagesIn = (file) => JSON.parse(readFileSync(file, 'utf8')).packages

/** Why the installed packages differ from the lock, in words; null when they agree. */
export const findDrift = () => {
  const hidden = inProject('node_modules/.package-lock.json')
  if (!existsSync(hidden)) return 'no packages are installed yet'
  const present = packagesIn(hidden)
  for (const [path, entry] of Object.entries(packagesIn(inProject('package-lock.json')))) {
    if (path === '' || entry.link) continue
    const found = present[path]
    // Optional packages are those of other platforms; npm leaves them out.
    if (!found && entry.optional) continue
    if (found?.version !== entry.version)
      return `${path} is ${found?.version ?? 'missing'}, the lock says ${entry.version}`
  }
  return null
}

/** Brings node_modules to what package-lock.json says. Costs milliseconds when it is there already. */
export const ensureInstalled = async () => {
  const drift = findDrift()
  if (drift) {
    console.log(`Installing packages with npm ci (${drift}) ...`)
    // Runs the script "prepare" as well. Building takes the development tools too, whatever NODE_ENV says.
    await run('npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'])
    return
  }
  await ensureKernel()
  if (!existsSync(inProject('.nuxt/tsconfig.json'))) await run('npx', ['nuxt', 'prepare'], { quiet: true })
}
