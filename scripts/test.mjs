/**
 * `npm test`: everything, straight after `git clone`. Installs what is missing, builds once, runs the static checks and
 * every test project, and ends with one line: `N passed, N failed`.
 *
 *   npm test                         all tiers
 *   npm test -- unit engine          some tiers
 *   npm test -- api --grep sessions  one tier, files whose path holds a word
 */
import { existsSync } from 'node:fs'
import { installPackages } from './debian.mjs'
import { requireServers } from './postgres/binaries.mjs'
import { ensureBuilt } from './steps/build.mjs'
import { runStaticChecks, runVitest } from './steps/check.mjs'
import { ensureInstalled } from './steps/install.mjs'

const tiers = {
  static: { projects: [] },
  guards: { projects: ['guards'], build: true },
  unit: { projects: ['unit', 'measurement'] },
  nuxt: { projects: ['nuxt'] },
  engine: { projects: ['engine'] },
  api: { projects: ['api'], build: true, database: true },
  browser: { projects: ['browser'], build: true, database: true, chromium: true },
}

const readArguments = (words) => {
  const chosen = []
  const filters = []
  for (let index = 0; index < words.length; index += 1) {
    const word = words[index]
    if (word === '--grep') filters.push(words[(index += 1)] ?? '')
    else if (word in tiers) chosen.push(word)
    else throw new Error(`"${word}" is no tier; expected one of ${Object.keys(tiers).join(', ')}, or --grep WORD`)
  }
  return { chosen: chosen.length > 0 ? chosen : Object.keys(tiers), filters }
}

const add = (total, counts) => {
  for (const key of Object.keys(total)) total[key] += counts[key]
}

const main = async () => {
  const { chosen, filters } = readArguments(process.argv.slice(2))
  const wanted = chosen.map((name) => tiers[name])
  const total = { passed: 0, failed: 0, skipped: 0 }
  await ensureInstalled()
  if (wanted.some((tier) => tier.database)) requireServers()
  if (wanted.some((tier) => tier.chromium) && !existsSync('/usr/bin/chromium')) {
    installPackages(['chromium'], 'The browser tests')
  }
  if (chosen.includes('static')) add(total, await runStaticChecks())
  if (wanted.some((tier) => tier.build)) await ensureBuilt()
  for (const { projects } of wanted) {
    if (projects.length > 0) add(total, await runVitest(projects, filters))
  }
  if (total.skipped > 0) console.log(`${total.skipped} skipped`)
  console.log(`${total.passed} passed, ${total.failed} failed`)
  return total.failed === 0 && total.passed > 0 ? 0 : 1
}

main()
  .catch((error) => {
    console.error(error.message)
    console.log('0 passed, 1 failed')
    return 1
  })
  .then((code) => {
    process.exitCode = code
  })
