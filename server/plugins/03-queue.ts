import { defineNitroPlugin, useRuntimeConfig } from 'nitropack/runtime'
import { stopListening } from '../database/notifications'
import { startConsumer, type Consumer } from '../jobs/consume'
import { startQueue, stopQueue } from '../jobs/queue'
import { closeRunStreams } from '../services/run-streams.service'
import { logger } from '../utils/logger'
import { isShuttingDown, onShutdown } from '../utils/shutdown'

const modes = ['inline', 'none']

/**
 * Every web process can put runs into the queue; with `queue: 'inline'` it also works them. The database may come later
 * than this process: the queue is started until it succeeds, and only then is anything taken from it.
 */
export default defineNitroPlugin(() => {
  const mode = String(useRuntimeConfig().queue)
  if (!modes.includes(mode)) throw new Error(`NUXT_QUEUE: expected ${modes.join(' or ')}; found "${mode}"`)
  let consumer: Consumer | undefined
  onShutdown('queue', async () => {
    await consumer?.stop()
    await stopQueue()
  })
  onShutdown('event streams', closeRunStreams)
  onShutdown('notices', stopListening, 'close')
  // After this module graph is evaluated: only then are addresses beside the server's entry known.
  setImmediate(() => {
    startQueue()
      .then(() => {
        if (mode === 'inline' && !isShuttingDown()) consumer = startConsumer()
      })
      .catch((error: unknown) => {
        logger.fatal({ event: 'queue.unusable', err: error })
        process.emit('SIGTERM')
      })
  })
})
