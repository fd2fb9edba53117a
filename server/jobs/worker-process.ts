import { setTimeout as sleep } from 'node:timers/promises'
import { closePool } from '../database/client'
import { stopListening } from '../database/notifications'
import { logger } from '../utils/logger'
import { startConsumer, type Consumer } from './consume'
import { startQueue, stopQueue } from './queue'

/**
 * A process that only works the queue (`npm run worker`), on this machine or another one with the same database. It is
 * compiled into the folder of the thread entries. It may start before PostgreSQL and outlives its restarts.
 */
const stopDeadlineMs = 8000

let consumer: Consumer | undefined
let ending: Promise<void> | undefined

const end = async (): Promise<void> => {
  await consumer?.stop()
  await stopQueue()
  await stopListening()
  await closePool()
}

const stop = (cause: string, code: number): void => {
  if (ending) return
  logger.info({ event: 'process.stopping', cause })
  ending = Promise.race([end(), sleep(stopDeadlineMs, undefined, { ref: false })])
    .catch((error: unknown) => logger.error({ event: 'shutdown.failed', err: error }))
    .finally(() => process.exit(code))
}

const crash = (kind: string, error: unknown): void => {
  logger.fatal({ event: `process.${kind}`, err: error })
  stop(kind, 1)
}

process.on('uncaughtException', (error) => crash('uncaught-exception', error))
process.on('unhandledRejection', (reason) => crash('unhandled-rejection', reason))
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.on(signal, () => stop(signal, 0))

if (!process.env.DATABASE_URL) {
  logger.fatal({ event: 'process.no-database', reason: 'DATABASE_URL: expected postgres://...; found nothing' })
  process.exit(1)
}

// Waiting for a database that is not there yet leaves nothing else that would keep this process alive.
const alive = setInterval(() => undefined, 60_000)
await startQueue()
// The thread entries lie beside this file, unless WORKERS_DIR names another place.
const directory = process.env.WORKERS_DIR ? undefined : new URL('./', import.meta.url)
if (!ending) consumer = startConsumer({ directory })
clearInterval(alive)
