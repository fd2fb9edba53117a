import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { closePool } from '../../../server/database/client'
import { stopListening } from '../../../server/database/notifications'
import { withGroup } from '../../../server/database/with-group'
import { startQueue, stopQueue } from '../../../server/jobs/queue'
import { cancelRun, createRun, getRun } from '../../../server/services/runs.service'
import { startServer, type BuiltServer } from '../../support/server'
import { Client } from '../support/client'
import { createGroup, register } from '../support/people'
import { openEvents } from './event-source'
import { cpuMsOf, quickTimes, startWorker, type WorkerProcess } from './processes'
import { openProxy, type DatabaseProxy } from './proxy'
import { compileTrialWorkers, openWorkbench, until, type Workbench } from './workbench'

let bench: Workbench
let workers: Awaited<ReturnType<typeof compileTrialWorkers>>
let userId: string
let groupId: string
const started: WorkerProcess[] = []
const servers: BuiltServer[] = []
let proxy: DatabaseProxy | undefined

const start = (env: Record<string, string> = {}) => {
  const worker = startWorker({ DATABASE_URL: bench.databaseUrl, WORKERS_DIR: workers.directory, ...env })
  started.push(worker)
  return worker
}
const startWeb = async (env: Record<string, string> = {}) => {
  const server = await startServer({
    env: { DATABASE_URL: bench.databaseUrl, WORKERS_DIR: workers.directory, ...quickTimes, ...env },
  })
  servers.push(server)
  return server
}

beforeAll(async () => {
  workers = await compileTrialWorkers()
  bench = await openWorkbench()
  process.env.DATABASE_URL = bench.databaseUrl
  await startQueue()
})

beforeEach(async () => {
  userId = await bench.addUser('Ada')
  groupId = await bench.addGroup(userId)
})

afterEach(async () => {
  for (const worker of started.splice(0)) {
    worker.kill('SIGCONT')
    worker.kill('SIGKILL')
    await worker.ended
  }
  for (const server of servers.splice(0)) await server.stop('SIGKILL')
  await proxy?.close()
  proxy = undefined
})

afterAll(async () => {
  await stopQueue()
  await stopListening()
  await closePool()
  await bench?.close()
  await workers?.remove()
})

const request = async (behaviour: string) => {
  const setId = await bench.addTrial(groupId, userId, behaviour)
  return createRun({ groupId, userId, setId, version: 1 })
}
const inState = (runId: string, states: string[], limitMs?: number) =>
  until(
    () => getRun(groupId, runId),
    (run) => states.includes(run.state),
    limitMs,
  )
const running = (runId: string) => inState(runId, ['running'])
const ended = (runId: string, limitMs?: number) => inState(runId, ['done', 'failed', 'cancelled'], limitMs)
const countResults = () =>
  withGroup(groupId, async (_tx, client) => {
    const { rows } = await client.query<{ count: number }>('select count(*)::int as count from results')
    return rows[0]?.count
  })

describe('kill -9', () => {
  it('of a worker process leaves one result, computed by another', async () => {
    const first = start()
    const run = await request('hold 2500')
    await running(run.id)
    first.kill('SIGKILL')
    await first.ended
    start()
    const begun = performance.now()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 2 })
    expect(performance.now() - begun).toBeLessThan(15_000)
    expect(await countResults()).toBe(1)
  })

  it('of the server leaves one result after its restart', async () => {
    const server = await startWeb()
    const run = await request('hold 2500')
    await running(run.id)
    await server.stop('SIGKILL')
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'running', attempt: 1 })
    await startWeb()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 2 })
    expect(await countResults()).toBe(1)
  })

  it('by the computation itself ends after three attempts, while other runs go on', async () => {
    const poison = await request('kill')
    const good = await Promise.all(Array.from({ length: 4 }, () => request('hold 5')))
    for (let life = 1; life <= 3; life++) {
      const worker = start()
      expect(await worker.ended).toBe('SIGKILL')
    }
    start()
    expect(await ended(poison.id)).toMatchObject({
      state: 'failed',
      attempt: 3,
      failure: { code: 'run/worker-lost' },
    })
    for (const run of good) expect((await ended(run.id)).state).toBe('done')
  })
})

describe('a frozen worker process', () => {
  it('loses its run to another one and writes nothing when it goes on', async () => {
    const frozen = start()
    const run = await request('hold 3000')
    await running(run.id)
    frozen.kill('SIGSTOP')
    start()
    // Frozen in the middle of a transaction it would hold the run's row until PostgreSQL ends that transaction (30 s).
    const done = await ended(run.id, 60_000)
    expect(done).toMatchObject({ state: 'done', attempt: 2 })
    frozen.kill('SIGCONT')
    await until(
      () => frozen.output(),
      (text) => /run\.stopped|run\.not-owned/.test(text),
    )
    expect(await getRun(groupId, run.id)).toEqual(done)
    expect(await countResults()).toBe(1)
  })
})

describe('a cancelled run', () => {
  it.each(['hold 60000', 'deaf 60000'])('leaves the processor idle within two seconds (%s)', async (behaviour) => {
    const worker = start()
    const run = await request(behaviour)
    await running(run.id)
    await pause(300)
    await cancelRun(groupId, run.id)
    const begun = performance.now()
    // A thread that still computed would use all it can get; an idle process asks the database now and then.
    const share = async () => {
      const [cpu, wall] = [cpuMsOf(worker.pid), performance.now()]
      await pause(500)
      return (cpuMsOf(worker.pid) - cpu) / (performance.now() - wall)
    }
    await until(share, (used) => used < 0.25)
    expect(performance.now() - begun).toBeLessThan(8000)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'cancelled', summary: null })
  })
})

describe('SIGTERM', () => {
  it.each(['hold 60000', 'deaf 60000'])('hands a running run back and exits with 0 (%s)', async (behaviour) => {
    const worker = start()
    const run = await request(behaviour)
    await running(run.id)
    const begun = performance.now()
    worker.kill('SIGTERM')
    worker.kill('SIGTERM')
    expect(await worker.ended).toBe(0)
    expect(performance.now() - begun).toBeLessThan(10_000)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'queued', attempt: 1 })
    await cancelRun(groupId, run.id)
  })

  it('does the same in a web server that works the queue', async () => {
    const server = await startWeb()
    const run = await request('hold 60000')
    await running(run.id)
    const begun = performance.now()
    expect(await server.stop('SIGTERM')).toBe(0)
    expect(performance.now() - begun).toBeLessThan(10_000)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'queued', attempt: 1 })
    await cancelRun(groupId, run.id)
  })
})

describe('SIGTERM with open streams', () => {
  it('ends the streams at once and does not wait for them', async () => {
    const server = await startWeb()
    const reader = await register('Reader', new Client(server.baseUrl))
    const group = await createGroup(reader, 'Readers')
    const streams = await Promise.all(Array.from({ length: 5 }, () => openEvents(reader.client, group)))
    const begun = performance.now()
    const stopped = server.stop('SIGTERM')
    await until(
      () => streams.every((stream) => stream.isClosed()),
      (over) => over,
      3000,
    )
    expect(await stopped).toBe(0)
    // With a stream left open the web server would wait for its whole deadline of eight seconds.
    expect(performance.now() - begun).toBeLessThan(5000)
  })
})

describe('an outage of the database', () => {
  it('loses no finished result and computes nothing twice', async () => {
    proxy = await openProxy(bench.databaseUrl)
    const worker = start({ DATABASE_URL: proxy.url })
    const run = await request('hold 1200')
    const waiting = await request('hold 10')
    await running(run.id)
    await pause(300)
    await proxy.cut()
    // Longer than the run and than a stale heartbeat: it ends, and its result waits for the database.
    await pause(2500)
    expect(worker.process.exitCode).toBeNull()
    await proxy.mend()
    const begun = performance.now()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
    expect(await ended(waiting.id)).toMatchObject({ state: 'done', attempt: 1 })
    expect(performance.now() - begun).toBeLessThan(15_000)
    expect(worker.output()).not.toContain('run.rescued')
    expect(await countResults()).toBe(2)
  })

  it('of a second is answered with 503, ends by itself, and costs an open page nothing', async () => {
    proxy = await openProxy(bench.databaseUrl)
    const server = await startWeb({ DATABASE_URL: proxy.url, NUXT_QUEUE: 'none' })
    const reader = await register('Reader', new Client(server.baseUrl))
    const group = await createGroup(reader, 'Readers')
    const stream = await openEvents(reader.client, group)
    const setId = await bench.addTrial(group, reader.id, 'hold 10')
    await proxy.cut()
    const begun = performance.now()
    const refused = await reader.client.get(`/api/groups/${group}/runs`)
    expect([refused.status, refused.json.code]).toEqual([503, 'service/unavailable'])
    // Hang guards at ten times the figure: a refusal takes half a second, a recovery up to five.
    expect(performance.now() - begun).toBeLessThan(20_000)
    // Asked for and computed by others, while this server hears nothing.
    start()
    const run = await createRun({ groupId: group, userId: reader.id, setId, version: 1 })
    await until(
      () => getRun(group, run.id),
      ({ state }) => state === 'done',
    )
    expect(stream.messages).toEqual([])
    await proxy.mend()
    const mended = performance.now()
    await until(
      async () => (await reader.client.get(`/api/groups/${group}/runs`)).status,
      (status) => status === 200,
    )
    expect(performance.now() - mended).toBeLessThan(50_000)
    await until(
      () => stream.messages.map(({ id, state }) => `${id} ${state}`),
      (heard) => heard.includes(`${run.id} done`),
    )
    expect(server.process.exitCode).toBeNull()
  })

  it('may be there before the processes are', async () => {
    proxy = await openProxy(bench.databaseUrl, { cut: true })
    const worker = start({ DATABASE_URL: proxy.url })
    const run = await request('hold 10')
    await until(
      () => worker.output(),
      (text) => text.includes('queue.start-failed'),
    )
    await pause(500)
    expect(worker.process.exitCode).toBeNull()
    await proxy.mend()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
  })
})

describe('several processes', () => {
  it('share one queue, each run computed once', async () => {
    start()
    start()
    await startWeb({ NUXT_QUEUE: 'none' })
    // Both at work before the first run: else the first one up may have done all of them.
    await until(
      () => started.filter((worker) => worker.output().includes('queue.working')).length,
      (working) => working >= 2,
    )
    const runs = await Promise.all(Array.from({ length: 30 }, (_, index) => request(`hold ${index}`)))
    for (const run of runs) expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
    expect(await countResults()).toBe(30)
    for (const worker of started) expect(worker.output()).toContain('run.ended')
  })
})
