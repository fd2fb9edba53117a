/**
 * `npm start`: from a bare checkout to a running application on this machine. Plain Node without packages up to the
 * moment they are installed. Every step looks first whether its work is done already, so a second start takes seconds.
 */
import { stop } from './pg.mjs'
import { choosePort, findRunning, forgetRunning, rememberRunning, waitUntilReady } from './steps/address.mjs'
import { ensureBuilt } from './steps/build.mjs'
import { prepareDatabase } from './steps/database.mjs'
import { loadDemo, printDemo } from './steps/demo.mjs'
import { localEnvironment } from './steps/environment.mjs'
import { ensureInstalled } from './steps/install.mjs'
import { inProject } from './steps/paths.mjs'
import { supervise } from './steps/supervise.mjs'

const main = async () => {
  const running = await findRunning()
  if (running) {
    console.log(`Linewright is already running at ${running}`)
    return 0
  }
  await ensureInstalled()
  await ensureBuilt()
  const database = await prepareDatabase()
  try {
    const port = await choosePort(Number(process.env.PORT ?? 3000))
    const env = localEnvironment(database, { port })
    const demo = await loadDemo(env)
    const address = env.NUXT_BASE_URL
    return await supervise({
      name: 'server',
      args: [inProject('.output/server/index.mjs')],
      env,
      onStart: async (_child, ended) => {
        await waitUntilReady(`http://127.0.0.1:${port}`, ended)
        rememberRunning(address)
        console.log(`\nLinewright is ready at ${address}`)
        printDemo(demo)
        console.log('Stop it with Ctrl+C; everything is kept.')
      },
    })
  } finally {
    forgetRunning()
    // Others may work with the same server (a development server, a worker): it is stopped only when it is idle.
    if (database.started) stop({ onlyIfUnused: true })
  }
}

main().then(
  (code) => {
    process.exitCode = code
  },
  (error) => {
    console.error(`\nLinewright could not start: ${error.message}`)
    process.exitCode = 1
  },
)
