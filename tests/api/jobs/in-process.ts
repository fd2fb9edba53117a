import { pathToFileURL } from 'node:url'
import { afterAll, afterEach, beforeAll, beforeEach } from 'vitest'
import { closePool } from '../../../server/database/client'
import { stopListening } from '../../../server/database/notifications'
import { withGroup } from '../../../server/database/with-group'
import { startConsumer, type Consumer } from '../../../server/jobs/consume'
import { startQueue, stopQueue } from '../../../server/jobs/queue'
import type { JobSettings } from '../../../server/jobs/settings'
import { createRun, getRun } from '../../../server/services/runs.service'
import { compileTrialWorkers, openWorkbench, until, type Workbench } from './workbench'

/** The proportions of the real times, shortened. */
const settings: JobSettings = {
  threads: 2,
  heapMb: 128,
  runLimitMs: 20_000,
  stopGraceMs: 300,
  heartbeatMs: 200,
  heartbeatStaleMs: 800,
  rescueMs: 100,
}

/**
 * A database with one person and one group a test, and a consumer in this process that is started when a test wants it.
 * Called at the top of a spec.
 */
export const inProcess = () => {
  let workers: Awaited<ReturnType<typeof compileTrialWorkers>>
  let consumer: Consumer | undefined
  const current = { bench: undefined as unknown as Workbench, userId: '', groupId: '' }
  const start = (change: Partial<JobSettings> = {}): void => {
    const directory = pathToFileURL(`${workers.directory}/`)
    consumer = startConsumer({ directory, settings: { ...settings, ...change } })
  }
  const stop = async (): Promise<void> => {
    await consumer?.stop()
    consumer = undefined
  }
  /** Asks for a run of a new set whose thread behaves as told. */
  const request = async (behaviour: string, groupId = current.groupId, userId = current.userId) => {
    const setId = await current.bench.addTrial(groupId, userId, behaviour)
    return createRun({ groupId, userId, setId, version: 1 })
  }
  const inState = (runId: string, states: string[], groupId = current.groupId) =>
    until(
      () => getRun(groupId, runId),
      (run) => states.includes(run.state),
    )
  const running = (runId: string) => inState(runId, ['running'])
  const ended = (runId: string, groupId = current.groupId) => inState(runId, ['done', 'failed', 'cancelled'], groupId)
  const countResults = () =>
    withGroup(current.groupId, async (_tx, client) => {
      const { rows } = await client.query<{ count: number }>('select count(*)::int as count from results')
      return rows[0]?.count
    })
  const attemptsOf = (runId: string) => current.bench.sql(`select * from run_attempts where run_id = $1`, [runId])

  beforeAll(async () => {
    workers = await compileTrialWorkers()
    current.bench = await openWorkbench()
    process.env.DATABASE_URL = current.bench.databaseUrl
    await startQueue()
  })
  beforeEach(async () => {
    current.userId = await current.bench.addUser('Ada')
    current.groupId = await current.bench.addGroup(current.userId)
  })
  afterEach(stop)
  afterAll(async () => {
    await stopQueue()
    await stopListening()
    await closePool()
    await current.bench?.close()
    await workers?.remove()
  })
  return Object.assign(current, { start, stop, request, inState, running, ended, countResults, attemptsOf })
}
