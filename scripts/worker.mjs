/**
 * `npm run worker`: a process that works the queue, beside the server or on another machine with the same database
 * (DATABASE_URL). Without DATABASE_URL it works the private database of this checkout.
 */
import { ensureBuilt } from './steps/build.mjs'
import { prepareDatabase } from './steps/database.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inProject } from './steps/paths.mjs'
import { supervise } from './steps/supervise.mjs'

try {
  await ensureInstalled()
  await ensureBuilt()
  // A given database is brought up to date by its server; this process waits for it as long as it takes.
  const DATABASE_URL = process.env.DATABASE_URL || (await prepareDatabase()).DATABASE_URL
  process.exitCode = await supervise({
    name: 'worker',
    args: [inProject('.output/server/workers/queue.mjs')],
    env: { DATABASE_URL, DATABASE_OWNER_URL: undefined },
  })
} catch (error) {
  console.error(`The worker could not start: ${error.message}`)
  process.exitCode = 1
}
