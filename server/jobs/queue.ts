import { setTimeout as sleep } from 'node:timers/promises'
import PgBoss from 'pg-boss'
import type { TransactionClient } from '../database/transaction'
import { getPool } from '../database/client'
import { AppError } from '../../shared/errors/app-error'
import { logger } from '../utils/logger'
import { jobNames, jobs, type JobName, type JobPayload } from './registry'

const schema = 'queue'

/** An entry taken from the queue. */
export interface Ticket {
  id: string
  data: unknown
  /** The turn in which it was queued: lower turns are served first. */
  turn: number
}

/**
 * pg-boss sends some of its statements as "begin; ...; commit;" in one text. When one of them fails, the client is left
 * inside a broken transaction, so it may not go back to the pool.
 */
const poolDatabase: PgBoss.Db = {
  executeSql: async (text, values) => {
    const client = await getPool().connect()
    let failure: Error | undefined
    const onLost = (error: Error) => (failure = error)
    client.on('error', onLost)
    try {
      return await client.query(text, values)
    } catch (error) {
      failure = error instanceof Error ? error : new Error(String(error))
      throw error
    } finally {
      client.removeListener('error', onLost)
      client.release(failure)
    }
  },
}

const within = (client: TransactionClient): PgBoss.Db => ({
  executeSql: (text, values) => client.query(text, values),
})

/** Everything else takes a client, so that entries and the rows they speak of change in one transaction. */
let boss: PgBoss | undefined
let starting: Promise<void> | undefined
let stopped = false

const newBoss = () => {
  const made = new PgBoss({
    db: poolDatabase,
    schema,
    schedule: false,
    supervise: true,
    maintenanceIntervalSeconds: 60,
  })
  // Maintenance that fails (database away) is tried again at its next turn.
  made.on('error', (error) => logger.warn({ event: 'queue.maintenance-failed', reason: error.message }))
  return made
}

const startOnce = async () => {
  // After a failed start an instance believes that it is starting for ever, so each try has its own.
  const candidate = newBoss()
  try {
    await candidate.start()
    for (const name of jobNames) {
      await candidate.createQueue(name, { ...jobs[name].queue, name })
      // createQueue leaves an existing queue as it was.
      await candidate.updateQueue(name, { ...jobs[name].queue, name })
    }
  } catch (error) {
    await candidate.stop({ graceful: false }).catch(() => undefined)
    throw error
  }
  boss = candidate
}

/** Makes the queue's tables and its queues; tries again until the database is there or the process ends. */
export const startQueue = (): Promise<void> => {
  stopped = false
  starting ??= (async () => {
    for (let delay = 250; !stopped; delay = Math.min(delay * 2, 5000)) {
      try {
        await startOnce()
        logger.info({ event: 'queue.ready' })
        return
      } catch (error) {
        logger.warn({ event: 'queue.start-failed', retryMs: delay, reason: reasonOf(error) })
        await sleep(delay, undefined, { ref: false })
      }
    }
  })()
  return starting
}

export const isQueueReady = (): boolean => boss !== undefined

/** Ends the maintenance timers. Entries can still be completed or put back by transactions under way. */
export const stopQueue = async (): Promise<void> => {
  stopped = true
  const ending = boss
  boss = undefined
  starting = undefined
  await ending?.stop({ graceful: false }).catch(() => undefined)
}

/** Sending and completing need the SQL of pg-boss only, so a process that is just stopping can still do it. */
let statements: PgBoss | undefined
const commands = (): PgBoss => boss ?? (statements ??= newBoss())

export const queue = {
  /** Puts an entry into the queue, in the caller's transaction. Never answers without an id. */
  send: async <Name extends JobName>(
    client: TransactionClient,
    name: Name,
    payload: JobPayload<Name>,
    options: { turn: number; delaySeconds?: number },
  ): Promise<string> => {
    const id = await commands().send(name, jobs[name].payload.parse(payload), {
      db: within(client),
      priority: -options.turn,
      ...(options.delaySeconds ? { startAfter: options.delaySeconds } : {}),
    })
    // pg-boss answers null, without an error, for a queue that does not exist.
    if (!id) {
      throw new AppError('service/unavailable', {
        detail: 'The queue is not ready yet; nothing was started. Try again shortly.',
      })
    }
    return id
  },

  /** Takes the next entry. When the transaction rolls back, the entry was never taken. */
  take: async (client: TransactionClient, name: JobName): Promise<Ticket | null> => {
    let failure: unknown
    const [job] = await commands().fetch<unknown>(name, {
      db: {
        // pg-boss swallows every error of this statement.
        executeSql: (text, values) =>
          client.query(text, values).catch((error: unknown) => {
            failure = error
            throw error
          }),
      },
      batchSize: 1,
      includeMetadata: true,
    } as PgBoss.FetchOptions & { includeMetadata: true })
    if (failure) throw failure
    return job ? { id: job.id, data: job.data, turn: -job.priority } : null
  },

  complete: async (client: TransactionClient, name: JobName, id: string): Promise<void> => {
    await commands().complete(name, id, undefined as unknown as object, { db: within(client) })
  },

  /**
   * Ends an entry whose work will not be done. One that is being taken at this moment is left alone: whoever takes it
   * waits for the run's row, finds that nothing is to be done, and completes it.
   */
  withdraw: async (client: TransactionClient, name: JobName, id: string): Promise<void> => {
    const { rows } = await client.query(
      `select id from ${schema}.job where name = $1 and id = $2 and state <= 'active' for update skip locked`,
      [name, id],
    )
    if (rows.length > 0) await commands().cancel(name, id, { db: within(client) })
  },

  /** Places in the queue, 1 = next, of those entries that still wait. */
  places: async (client: TransactionClient, name: JobName, ids: readonly string[]): Promise<Map<string, number>> => {
    if (ids.length === 0) return new Map()
    const { rows } = await client.query<{ id: string; place: string }>(
      `select id, place from (
         select id, row_number() over (order by priority desc, created_on, id) as place
         from ${schema}.job where name = $1 and state < 'active'
       ) waiting where id = any($2::uuid[])`,
      [name, ids],
    )
    return new Map(rows.map((row) => [row.id, Number(row.place)]))
  },

  /** Which of these entries neither wait nor are being worked on: lost, archived or ended. */
  missing: async (client: TransactionClient, name: JobName, ids: readonly string[]): Promise<Set<string>> => {
    const { rows } = await client.query<{ id: string }>(
      `select id from ${schema}.job where name = $1 and state <= 'active' and id = any($2::uuid[])`,
      [name, ids],
    )
    const present = new Set(rows.map((row) => row.id))
    return new Set(ids.filter((id) => !present.has(id)))
  },
}

const reasonOf = (error: unknown) => (error instanceof Error ? error.message : String(error))
