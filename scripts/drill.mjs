/**
 * `npm run drill -- NAME [--full] [--seed N]`: long trials that `npm test` has no time for, against the built application.
 * Each prints its figures and its seed, and ends with an error when a figure is missed. `all` runs every one.
 */
import { readdirSync } from 'node:fs'
import { randomInt } from 'node:crypto'
import { requireServers } from './postgres/binaries.mjs'
import { ensureBuilt } from './steps/build.mjs'
import { runVitest } from './steps/check.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inProject } from './steps/paths.mjs'

const suffix = '.drill.ts'
const names = readdirSync(inProject('tests/drills'))
  .filter((name) => name.endsWith(suffix))
  .map((name) => name.slice(0, -suffix.length))

const readArguments = (words) => {
  const seedAt = words.indexOf('--seed')
  const seed = seedAt < 0 ? randomInt(1, 2 ** 31) : Number(words[seedAt + 1])
  if (!Number.isSafeInteger(seed)) throw new Error('--seed: expected a whole number')
  const [name] = words.filter((word, index) => !word.startsWith('--') && index !== seedAt + 1)
  if (!name || (name !== 'all' && !names.includes(name))) {
    throw new Error(`expected the name of a drill: ${[...names, 'all'].join(', ')}`)
  }
  return { chosen: name === 'all' ? names : [name], full: words.includes('--full'), seed }
}

try {
  const { chosen, full, seed } = readArguments(process.argv.slice(2))
  await ensureInstalled()
  requireServers()
  await ensureBuilt()
  let failed = 0
  for (const name of chosen) {
    console.log(`drill ${name}, ${full ? 'full' : 'short'} form, seed ${seed}`)
    const counts = await runVitest(['drills'], [`tests/drills/${name}${suffix}`], {
      DRILL_SEED: String(seed),
      DRILL_FULL: full ? '1' : '',
    })
    failed += counts.failed + (counts.passed === 0 ? 1 : 0)
  }
  process.exitCode = failed === 0 ? 0 : 1
} catch (error) {
  console.error(error.message)
  process.exitCode = 1
}
