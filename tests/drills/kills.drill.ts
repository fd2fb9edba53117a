import type { ChildProcess } from 'node:child_process'
import { chmodSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, afterEach, describe, expect, it } from 'vitest'
import { start, status, stop } from '../../scripts/pg.mjs'
import { closePool } from '../../server/database/client'
import { stopListening } from '../../server/database/notifications'
import { withGroup } from '../../server/database/with-group'
import { startQueue, stopQueue } from '../../server/jobs/queue'
import { createRun, retryRun } from '../../server/services/runs.service'
import { startServer, type BuiltServer } from '../support/server'
import { quickTimes, startWorker, type WorkerProcess } from '../api/jobs/processes'
import { compileTrialWorkers, openWorkbench } from '../api/jobs/workbench'
import { isFull, makeRandom, print, seed } from './drill'

/**
 * A hundred runs while workers, the server and PostgreSQL are killed again and again. Every run must end with exactly
 * one stored result, or visibly failed because it lost its worker three times.
 */
const runs = 100
const kills = { worker: 20, server: 5, postgres: 3 }
const settleMs = 5 * 60_000

// A cluster of its own: it is going to be killed.
const folder = mkdtempSync(join(tmpdir(), 'linewright-drill-'))
// PostgreSQL does not run as root: its own account must be able to enter.
chmodSync(folder, 0o755)
process.env.PG_DIR = join(folder, 'cluster')

/** Ends what the drill keeps alive, also when it fails half way. */
let endAll = (): void => undefined

afterEach(() => endAll())

afterAll(() => {
  stop()
  rmSync(folder, { recursive: true, force: true })
})

/** Asks again while PostgreSQL is down. */
const insist = async <T>(ask: () => Promise<T>): Promise<T> => {
  for (let tries = 0; ; tries++) {
    try {
      return await ask()
    } catch (error) {
      if (tries > 100) throw error
      await pause(200)
    }
  }
}

const exited = ({ process: child }: BuiltServer) =>
  new Promise<void>((done) => {
    if (child.exitCode !== null || child.signalCode !== null) done()
    else child.once('exit', () => done())
  })

/** The attempt of a process that was just killed is still there for a moment. */
const livingPid = (child: ChildProcess | undefined) =>
  child && child.exitCode === null && child.signalCode === null && !child.killed ? child.pid : undefined

const killPostgres = async () => {
  const cluster = status()
  if (!cluster) return
  const pid = Number(readFileSync(join(cluster.data, 'postmaster.pid'), 'utf8').split('\n')[0])
  process.kill(pid, 'SIGKILL')
  await pause(500)
  await insist(() => start())
}

const failedRuns = (groupId: string) =>
  withGroup(groupId, async (_tx, client) => {
    const { rows } = await client.query<{ id: string }>(`select id from runs where state = 'failed'`)
    return rows.map(({ id }) => id)
  })

const drill = async (round: number) => {
  const random = makeRandom(seed + round)
  const trial = await compileTrialWorkers()
  const bench = await openWorkbench()
  process.env.DATABASE_URL = bench.databaseUrl
  await startQueue()
  const env = { DATABASE_URL: bench.databaseUrl, WORKERS_DIR: trial.directory }
  const userId = await bench.addUser('Ada')
  const groupId = await bench.addGroup(userId)

  let over = false
  const workers: WorkerProcess[] = []
  const keepWorker = async (slot: number) => {
    while (!over) {
      const worker = (workers[slot] = startWorker(env))
      await worker.ended
    }
  }
  let server: BuiltServer | undefined
  const keepServer = async () => {
    while (!over) {
      server = await startServer({ env: { ...env, ...quickTimes } }).catch(() => undefined)
      // Started while the drill came to its end.
      if (over) server?.process.kill('SIGKILL')
      if (server) await exited(server)
    }
  }
  endAll = () => {
    over = true
    for (const worker of workers) worker?.kill('SIGKILL')
    server?.process.kill('SIGKILL')
  }
  // Queued before anybody works, so that the kills fall into the work.
  for (let index = 0; index < runs; index++) {
    const setId = await bench.addTrial(groupId, userId, `hold ${Math.round(300 + 600 * random())}`)
    await createRun({ groupId, userId, setId, version: 1 })
  }
  const keeping = [keepWorker(0), keepWorker(1), keepServer()]
  const victims = Object.entries(kills).flatMap(([kind, count]) => Array.from({ length: count }, () => kind))
  for (let index = victims.length - 1; index > 0; index--) {
    const other = Math.floor(random() * (index + 1))
    ;[victims[index], victims[other]] = [victims[other] ?? '', victims[index] ?? '']
  }
  let hits = 0
  /** Kills a process in the middle of a run, when it comes to one in time. */
  const killBusy = async (pidNow: () => number | undefined) => {
    const patience = performance.now() + 10_000
    for (;;) {
      const pid = pidNow()
      const attempts = await insist(() =>
        bench.sql('select run_id from run_attempts where worker_id like $1', [`%/${pid}/%`]),
      )
      const late = performance.now() > patience
      if (pid && pid === pidNow() && (attempts.length > 0 || late)) {
        process.kill(pid, 'SIGKILL')
        hits += attempts.length
        // Until its exit is noticed here, its attempt would look like that of a living process.
        while (pidNow() === pid) await pause(5)
        return
      }
      if (late) return
      await pause(20)
    }
  }
  for (const victim of victims) {
    await pause(100 + 300 * random())
    if (victim === 'postgres') await killPostgres()
    else if (victim === 'server') await killBusy(() => livingPid(server?.process))
    else {
      const slot = Math.floor(random() * 2)
      await killBusy(() => livingPid(workers[slot]?.process))
    }
  }

  const lastKill = performance.now()
  const look = () =>
    insist(() =>
      withGroup(groupId, async (_tx, client) => {
        const { rows } = await client.query<Record<string, number>>(
          `select count(*) filter (where state = 'done' and result_id is not null)::int as done,
                  count(*) filter (where state = 'failed' and failure->>'code' = 'run/worker-lost')::int as lost,
                  count(*)::int as runs, coalesce(sum(attempt), 0)::int as attempts,
                  (select count(*)::int from results) as results,
                  (select count(*)::int from run_attempts) as open,
                  (select count(*)::int from queue.job where name = 'simulate' and state <= 'active') as entries
           from runs`,
        )
        return rows[0] ?? {}
      }),
    )
  let state = await look()
  while ((state.done ?? 0) + (state.lost ?? 0) < runs && performance.now() - lastKill < settleMs) {
    await pause(250)
    state = await look()
  }
  // A run that lost its worker three times is a visible failure; a person asks for it again.
  const lost = state.lost ?? 0
  for (const runId of await failedRuns(groupId)) await retryRun({ groupId, userId, runId })
  while ((state = await look()).done !== runs && performance.now() - lastKill < settleMs) await pause(250)
  const settledMs = Math.round(performance.now() - lastKill)
  endAll()
  await Promise.all(keeping)
  await stopQueue()
  await stopListening()
  await closePool()
  await bench.close()
  await trial.remove()
  print(`kills, round ${round}, seed ${seed + round}`, { ...state, lost, hits, settledMs })
  return { ...state, attempts: state.attempts ?? 0, lost, hits }
}

describe('kill -9 of workers, server and PostgreSQL', () => {
  it.each(Array.from({ length: isFull ? 10 : 2 }, (_, round) => round))('round %i loses nothing', async (round) => {
    const state = await drill(round)
    expect(state).toMatchObject({ runs, open: 0, entries: 0 })
    expect(state).toMatchObject({ done: runs, results: runs })
    // The drill is worth nothing unless it hits runs.
    expect(state.hits).toBeGreaterThanOrEqual(15)
    expect(state.attempts).toBeGreaterThanOrEqual(runs + state.hits)
    // Three losses of one run are possible, and rare when the victims are chosen at random.
    expect(state.lost).toBeLessThanOrEqual(5)
  })
})
