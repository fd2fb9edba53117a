import type { H3Event } from 'h3'
import { defineNitroPlugin } from 'nitropack/runtime'
import { logger } from '../utils/logger'
import { endPhase, onShutdown, refuseRequests } from '../utils/shutdown'
import { closePool } from '../database/client'

const crashDeadlineMs = 6000

/**
 * After an uncaught error nobody knows what state the process is in. It refuses new work, lets the running requests
 * and jobs end for a moment, and exits with an error; whoever supervises it starts a fresh one.
 */
const crash = (kind: string, error: unknown): void => {
  logger.fatal({ event: `process.${kind}`, err: error })
  process.exitCode = 1
  refuseRequests()
  const exit = () => process.exit(1)
  setTimeout(exit, crashDeadlineMs).unref()
  void endPhase('drain')
    .then(() => endPhase('close'))
    .finally(exit)
}

/**
 * Node takes the socket away from a request whose body was abandoned. When the answer is out, the framework marks that
 * socket as idle without looking, and would throw outside of any request; so it is given back just before.
 */
const keepSocket = ({ req, res }: H3Event['node']): void => {
  const { socket } = req
  res.prependOnceListener('finish', () => {
    if (!req.socket) Object.defineProperty(req, 'socket', { value: socket, writable: true, configurable: true })
  })
}

export default defineNitroPlugin((nitro) => {
  nitro.hooks.hook('request', (event) => keepSocket(event.node))
  onShutdown('database pool', closePool, 'close')
  nitro.hooks.hook('close', async () => {
    await endPhase('drain')
    await endPhase('close')
  })
  if (import.meta.dev) return
  // The web server's own deadline for open requests; supervisors wait ten seconds.
  process.env.NITRO_SHUTDOWN_TIMEOUT ??= '8000'
  process.on('uncaughtException', (error) => crash('uncaught-exception', error))
  process.on('unhandledRejection', (reason) => crash('unhandled-rejection', reason))
  // The framework's close hook waits for open requests; streams only end when told, so they are told at once.
  for (const signal of ['SIGTERM', 'SIGINT'] as const) {
    process.once(signal, () => {
      logger.info({ event: 'process.stopping', signal })
      void endPhase('drain')
    })
  }
})
