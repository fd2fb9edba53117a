/**
 * `npm run serve`: the production mode. No demo, nothing made up: secrets come from the environment or from files named
 * there, and a missing, short or example value stops the start before anything listens.
 */
import { ensureBuilt } from './steps/build.mjs'
import { countDemoAccounts, prepareDatabase } from './steps/database.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inProject } from './steps/paths.mjs'
import { productionEnvironment } from './steps/production.mjs'
import { supervise } from './steps/supervise.mjs'

const refuse = (lines) => {
  console.error(['Linewright does not start in production mode:', ...lines.map((line) => `  - ${line}`)].join('\n'))
  process.exitCode = 1
}

const main = async () => {
  const { env, problems } = productionEnvironment(process.env)
  if (problems.length > 0) return refuse(problems)
  Object.assign(process.env, env)
  await ensureInstalled()
  const demoAccounts = await countDemoAccounts(env.DATABASE_URL)
  if (demoAccounts > 0) {
    return refuse([
      `the database holds ${demoAccounts} demo accounts, whose passwords were printed; expected a database without the demo`,
    ])
  }
  await ensureBuilt()
  await prepareDatabase()
  // The owner's address is for migrations only; the serving process never sees it.
  process.exitCode = await supervise({
    name: 'server',
    args: [inProject('.output/server/index.mjs')],
    env: { HOST: process.env.HOST ?? '127.0.0.1', ...env, DATABASE_OWNER_URL: undefined },
  })
}

main().catch((error) => refuse([error.message]))
