/** `npm run dev`: the development server on the same database, files and demo as `npm start`. */
import { stop } from './pg.mjs'
import { choosePort } from './steps/address.mjs'
import { prepareDatabase } from './steps/database.mjs'
import { loadDemo, printDemo } from './steps/demo.mjs'
import { localEnvironment } from './steps/environment.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { installed } from './steps/run.mjs'
import { supervise } from './steps/supervise.mjs'

try {
  await ensureInstalled()
  const database = await prepareDatabase()
  const port = await choosePort(Number(process.env.PORT ?? 3000))
  const env = localEnvironment(database, { port })
  printDemo(await loadDemo(env))
  process.exitCode = await supervise({
    name: 'development server',
    args: [installed('nuxt'), 'dev', '--host', '127.0.0.1', '--port', String(port), ...process.argv.slice(2)],
    env,
  })
  if (database.started) stop({ onlyIfUnused: true })
} catch (error) {
  console.error(`The development server could not start: ${error.message}`)
  process.exitCode = 1
}
