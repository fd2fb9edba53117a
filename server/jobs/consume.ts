import { setTimeout as sleep } from 'node:timers/promises'
import { isDatabaseDown } from '../database/outage'
import { onNotice } from '../database/notifications'
import { withTransaction } from '../database/transaction'
import { logger } from '../utils/logger'
import { ThreadPool } from './pool'
import { queue, type Ticket } from './queue'
import {
  assertHandlers,
  jobNames,
  jobs,
  type JobEntry,
  type JobHandler,
  type JobHandlers,
  type JobName,
} from './registry'
import { startRescuer } from './rescue'
import { readJobSettings, type JobSettings } from './settings'
import { makeSimulateHandler } from './simulate'

export interface Consumer {
  /** Takes nothing more, hands running work back to the queue, ends the threads. */
  stop: () => Promise<void>
}

/** Looks into the queue this often when no notice comes: notices can be missed, entries can be delayed. */
const idleMs = 2000

type AnyHandler = JobHandler<unknown, unknown>
type Taken = { name: JobName; claim: unknown }

/** Wakes a sleeping loop; a ring while it is busy counts as well. */
const makeBell = () => {
  let rung = false
  let wake: (() => void) | undefined
  return {
    ring: () => {
      rung = true
      wake?.()
    },
    wait: async (ms: number) => {
      if (!rung) {
        const waiting = new AbortController()
        const woken = new Promise<void>((resolve) => (wake = resolve))
        await Promise.race([woken, sleep(ms, undefined, { signal: waiting.signal }).catch(() => undefined)])
        waiting.abort()
      }
      rung = false
      wake = undefined
    },
  }
}

/**
 * Takes one entry and claims its work in one transaction. Undefined: the queue is empty; null: an entry was used up
 * without leaving anything to do.
 */
const takeOne = async (name: JobName, handler: AnyHandler): Promise<Taken | null | undefined> => {
  let ticket = null as Ticket | null
  try {
    return await withTransaction(async (tx, client) => {
      ticket = await queue.take(client, name)
      if (!ticket) return undefined
      const entry = readEntry(name, ticket)
      const claim = entry && (await handler.claim({ tx, client }, entry))
      if (claim) return { name, claim }
      await queue.complete(client, name, ticket.id)
      return null
    })
  } catch (error) {
    if (!ticket || isDatabaseDown(error)) throw error
    await refuse(name, handler, ticket, error)
    return null
  }
}

const readEntry = (name: JobName, ticket: Ticket): JobEntry<unknown> | null => {
  const payload = jobs[name].payload.safeParse(ticket.data)
  if (payload.success) return { id: ticket.id, turn: ticket.turn, payload: payload.data }
  logger.error({ event: 'queue.payload-unreadable', name, jobId: ticket.id, reason: payload.error.message })
  return null
}

/** An entry that cannot be claimed would otherwise stand at the head of the queue for ever. */
const refuse = async (name: JobName, handler: AnyHandler, ticket: Ticket, error: unknown): Promise<void> => {
  logger.error({ event: 'queue.claim-failed', name, jobId: ticket.id, err: error })
  await withTransaction(async (tx, client) => {
    await queue.withdraw(client, name, ticket.id)
    const entry = readEntry(name, ticket)
    if (entry) await handler.refuse({ tx, client }, entry)
  })
}

/** Starts working the queue. `directory`: where the compiled thread entries lie, when not beside the server's entry. */
export const startConsumer = (options: { directory?: URL; settings?: JobSettings } = {}): Consumer => {
  const settings = options.settings ?? readJobSettings()
  const pool = new ThreadPool({ threads: settings.threads, heapMb: settings.heapMb, directory: options.directory })
  const handlers: JobHandlers = { simulate: makeSimulateHandler(pool, settings) }
  assertHandlers(handlers)
  return consume(pool, handlers, settings)
}

export const consume = (pool: ThreadPool, handlers: JobHandlers, settings: JobSettings): Consumer => {
  const stopping = new AbortController()
  const bell = makeBell()
  const working = new Set<Promise<void>>()
  const offs = [onNotice('queued', bell.ring), onNotice('reconnected', bell.ring)]
  const rescuer = startRescuer(settings)

  const begin = ({ name, claim }: Taken) => {
    const work = handlers[name]
      .work(claim, stopping.signal)
      .catch((error: unknown) => logger.error({ event: 'queue.work-failed', name, err: error }))
      .finally(() => {
        working.delete(work)
        bell.ring()
      })
    working.add(work)
  }

  /** True when anything was in the queue. */
  const takeNext = async (): Promise<boolean> => {
    for (const name of jobNames) {
      const taken = await takeOne(name, handlers[name])
      if (taken) begin(taken)
      if (taken !== undefined) return true
    }
    return false
  }

  const loop = async () => {
    let pause = 250
    while (!stopping.signal.aborted) {
      try {
        // As many as there are threads: what waits, waits in PostgreSQL, where every process can take it.
        const found = working.size < pool.threads && (await takeNext())
        pause = 250
        if (!found) await bell.wait(idleMs)
      } catch (error) {
        logger.warn({
          event: 'queue.take-failed',
          retryMs: pause,
          reason: error instanceof Error ? error.message : error,
        })
        await bell.wait(pause)
        pause = Math.min(pause * 2, 5000)
      }
    }
  }
  const looping = loop()
  logger.info({ event: 'queue.working', threads: pool.threads })

  return {
    stop: async () => {
      stopping.abort()
      bell.ring()
      for (const off of offs) off()
      await Promise.all([looping, rescuer.stop()])
      await Promise.all(working)
      await pool.destroy()
    },
  }
}
