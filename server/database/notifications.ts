import { EventEmitter } from 'node:events'
import { setTimeout as sleep } from 'node:timers/promises'
import { Client } from 'pg'
import { logger } from '../utils/logger'
import { databaseLimits } from './client'
import type { TransactionClient } from './transaction'

/** What processes tell each other through PostgreSQL. Delivered when the transaction that says it commits. */
export interface Notices {
  /** A run changed: everything that an event stream shows. */
  run: [
    {
      groupId: string
      id: string
      state: string
      progress: number
      secondsLeft: number | null
      /** Milliseconds since 1970, by the database's clock. */
      at: number
    },
  ]
  /** The attempt no longer owns the run: whoever computes it may stop. */
  revoked: [{ runId: string; attempt: number }]
  /** Something new waits in the queue. */
  queued: [Record<string, never>]
  /** The line to PostgreSQL was down, so notices may have been missed. Said by this process to itself. */
  reconnected: []
}

type Channel = Exclude<keyof Notices, 'reconnected'>

const channel = 'linewright'

export const notify = async <Name extends Channel>(
  client: TransactionClient,
  name: Name,
  ...[content]: Notices[Name]
): Promise<void> => {
  await client.query('select pg_notify($1, $2)', [channel, JSON.stringify([name, content])])
}

const heard = new EventEmitter<Notices>().setMaxListeners(0)
let running: { stop: () => Promise<void> } | undefined

/** Registers a listener and returns how to take it away. The process's one LISTEN connection opens with the first. */
export const onNotice = <Name extends keyof Notices>(
  name: Name,
  listener: (...content: Notices[Name]) => void,
): (() => void) => {
  running ??= listen()
  heard.on(name, listener as never)
  return () => void heard.off(name, listener as never)
}

export const stopListening = async (): Promise<void> => {
  const ending = running
  running = undefined
  await ending?.stop()
}

const connect = async (onEnd: () => void): Promise<Client> => {
  const client = new Client({
    connectionString: process.env.DATABASE_URL,
    application_name: 'linewright-listen',
    connectionTimeoutMillis: databaseLimits.connect,
    query_timeout: databaseLimits.connect,
    keepAlive: true,
    keepAliveInitialDelayMillis: 10_000,
  })
  // Without a listener, a server that goes away would end this process.
  client.on('error', onEnd)
  client.on('end', onEnd)
  client.on('notification', ({ payload }) => hear(payload))
  try {
    await client.connect()
    await client.query(`listen ${channel}`)
    return client
  } catch (error) {
    await client.end().catch(() => undefined)
    throw error
  }
}

const hear = (payload: string | undefined) => {
  try {
    const [name, content] = JSON.parse(payload ?? '') as [Channel, never]
    heard.emit(name, content)
  } catch (error) {
    logger.error({ event: 'notice.unreadable', err: error })
  }
}

/** A dead line looks like a silent one; asking now and then tells them apart. */
const keepAsking = (client: Client, onEnd: () => void): NodeJS.Timeout =>
  setInterval(() => {
    client.query('select 1').catch(onEnd)
  }, 20_000).unref()

/** Resolves when the line is lost or the process stops listening. */
const untilLost = async (stopping: AbortSignal, onConnected: () => void): Promise<void> => {
  let lose!: () => void
  const lost = new Promise<void>((resolve) => (lose = resolve))
  const client = await connect(lose)
  const asking = keepAsking(client, lose)
  stopping.addEventListener('abort', lose, { once: true })
  try {
    onConnected()
    if (!stopping.aborted) await lost
  } finally {
    clearInterval(asking)
    stopping.removeEventListener('abort', lose)
    // Saying goodbye over a dead line would wait for the network to give up.
    await Promise.race([client.end().catch(() => undefined), sleep(1000, undefined, { ref: false })])
  }
}

const listen = () => {
  const stopping = new AbortController()
  const loop = async () => {
    let delay = 100
    let before = false
    while (!stopping.signal.aborted) {
      try {
        await untilLost(stopping.signal, () => {
          delay = 100
          if (before) heard.emit('reconnected')
          before = true
        })
        if (!stopping.signal.aborted) logger.warn({ event: 'notice.connection-lost' })
      } catch (error) {
        logger.warn({ event: 'notice.connect-failed', reason: error instanceof Error ? error.message : String(error) })
      }
      await sleep(delay, undefined, { ref: false, signal: stopping.signal }).catch(() => undefined)
      delay = Math.min(delay * 2, 5000)
    }
  }
  const ended = loop()
  return {
    stop: async () => {
      stopping.abort()
      await Promise.race([ended, sleep(2000, undefined, { ref: false })])
    },
  }
}
