import { pathToFileURL } from 'node:url'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { closePool } from '../../../server/database/client'
import { onNotice, stopListening, type Notices } from '../../../server/database/notifications'
import { withTransaction } from '../../../server/database/transaction'
import { startConsumer, type Consumer } from '../../../server/jobs/consume'
import { queue, startQueue, stopQueue } from '../../../server/jobs/queue'
import type { JobSettings } from '../../../server/jobs/settings'
import { claimRun, finishRun, recordProgress, returnRun } from '../../../server/services/run-execution.service'
import { reconcileRuns } from '../../../server/services/run-reconcile.service'
import { cancelRun, createRun, getRun, listRuns, readArray, retryRun } from '../../../server/services/runs.service'
import { compileTrialWorkers, openWorkbench, until, type Workbench } from './workbench'

const settings: JobSettings = {
  threads: 2,
  heapMb: 128,
  runLimitMs: 20_000,
  stopGraceMs: 300,
  heartbeatMs: 200,
  heartbeatStaleMs: 800,
  rescueMs: 100,
}

let bench: Workbench
let workers: Awaited<ReturnType<typeof compileTrialWorkers>>
let consumer: Consumer | undefined
let userId: string
let groupId: string

const start = (change: Partial<JobSettings> = {}) => {
  consumer = startConsumer({
    directory: pathToFileURL(`${workers.directory}/`),
    settings: { ...settings, ...change },
  })
}
const stop = async () => {
  await consumer?.stop()
  consumer = undefined
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

afterEach(stop)

afterAll(async () => {
  await stopQueue()
  await stopListening()
  await closePool()
  await bench?.close()
  await workers?.remove()
})

const request = async (behaviour: string, group = groupId, user = userId) => {
  const setId = await bench.addTrial(group, user, behaviour)
  return createRun({ groupId: group, userId: user, setId, version: 1 })
}
const ended = (runId: string, group = groupId) =>
  until(
    () => getRun(group, runId),
    (run) => ['done', 'failed', 'cancelled'].includes(run.state),
  )
const countResults = async (group = groupId) => {
  const rows = await withTransaction(async (_tx, client) => {
    await client.query(`select set_config('app.group_id', $1, true)`, [group])
    return (await client.query(`select id from results where group_id = $1`, [group])).rows
  })
  return rows.length
}
const attemptsOf = (runId: string) => bench.sql(`select * from run_attempts where run_id = $1`, [runId])

describe('a run', () => {
  it('waits, computes with progress that never falls, and is stored with its arrays', async () => {
    const heard: Notices['run'][0][] = []
    const off = onNotice('run', (notice) => heard.push(notice))
    const queued = await request('hold 1500')
    expect(queued).toMatchObject({ state: 'queued', queuePlace: 1, progress: 0, attempt: 0, summary: null })
    start()
    const run = await ended(queued.id)
    off()
    expect(run).toMatchObject({ state: 'done', progress: 1, secondsLeft: null, attempt: 1, failure: null })
    expect(run.computeMs).toBeGreaterThan(1400)
    expect(run.summary?.arrays.map(({ key }) => key)).toEqual(['absorption/0'])
    const array = await readArray(groupId, run.id, 'absorption/0')
    expect(new Float64Array(Uint8Array.from(array.bytes).buffer)[0]).toBe(0)
    expect(array).toMatchObject({ dataType: 'float64', shape: [256], unit: '1/meV' })
    expect(await attemptsOf(run.id)).toEqual([])

    const own = heard.filter((notice) => notice.id === run.id)
    expect(own.map(({ state }) => state)).toEqual([
      'queued',
      'running',
      ...own.slice(2, -1).map(() => 'running'),
      'done',
    ])
    expect(own.length).toBeGreaterThanOrEqual(5)
    expect(own.length).toBeLessThanOrEqual(9)
    const progress = own.map((notice) => notice.progress)
    expect([...progress].sort((a, b) => a - b)).toEqual(progress)
    expect(own.some((notice) => notice.secondsLeft !== null && notice.secondsLeft > 0)).toBe(true)
  })

  it('keeps the reason of a computation that was refused', async () => {
    start()
    const run = await ended((await request('refuse')).id)
    expect(run).toMatchObject({ state: 'failed', failure: { code: 'engine/invalid', message: 'refused by the trial' } })
    await expect(readArray(groupId, run.id, 'absorption/0')).rejects.toMatchObject({ code: 'run/no-result' })
  })

  it('is computed once for equal input: asked twice, asked later, asked for another version of equal content', async () => {
    const setId = await bench.addTrial(groupId, userId, 'hold 300')
    const asked = await Promise.all(Array.from({ length: 20 }, () => createRun({ groupId, userId, setId, version: 1 })))
    expect(new Set(asked.map(({ id }) => id)).size).toBe(1)
    start()
    const first = await ended(asked[0]!.id)
    const later = await createRun({ groupId, userId, setId, version: 1 })
    expect(later.id).not.toBe(first.id)
    expect(later).toMatchObject({ state: 'done', progress: 1, attempt: 0, inputHash: first.inputHash })
    expect(later.summary).toEqual(first.summary)
    expect(await countResults()).toBe(1)
  })

  it('waits for an equal run of another set that is being computed, and shares its result', async () => {
    const change = { zeroPhononEnergyMeV: 1234.5, modes: [{ label: 'hold 700', energyMeV: 5, huangRhys: 0.1 }] }
    const sets = [await bench.addSet(groupId, userId, change), await bench.addSet(groupId, userId, change)]
    const runs = await Promise.all(sets.map((setId) => createRun({ groupId, userId, setId, version: 1 })))
    start()
    const [one, two] = await Promise.all(runs.map(({ id }) => ended(id)))
    expect([one!.attempt, two!.attempt].sort()).toEqual([0, 1])
    expect(one!.inputHash).toBe(two!.inputHash)
    expect(await countResults()).toBe(1)
  })

  it('does not share results between groups', async () => {
    const other = await bench.addGroup(userId)
    const change = { zeroPhononEnergyMeV: 1111, modes: [{ label: 'hold 10', energyMeV: 5, huangRhys: 0.1 }] }
    const mine = await createRun({ groupId, userId, setId: await bench.addSet(groupId, userId, change), version: 1 })
    start()
    await ended(mine.id)
    const setId = await bench.addSet(other, userId, change)
    const theirs = await createRun({ groupId: other, userId, setId, version: 1 })
    expect(theirs).toMatchObject({ state: 'queued', inputHash: mine.inputHash })
    expect(await ended(theirs.id, other)).toMatchObject({ state: 'done', attempt: 1 })
    await expect(getRun(other, mine.id)).rejects.toMatchObject({ code: 'request/not-found' })
    await expect(readArray(other, mine.id, 'absorption/0')).rejects.toMatchObject({ code: 'request/not-found' })
  })
})

describe('cancelling', () => {
  it('ends a waiting run for good', async () => {
    const run = await request('hold 10')
    expect(await cancelRun(groupId, run.id)).toMatchObject({ state: 'cancelled' })
    start()
    const next = await request('hold 10')
    await ended(next.id)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'cancelled', attempt: 0, startedAt: null })
    await expect(cancelRun(groupId, run.id)).rejects.toMatchObject({ code: 'run/not-cancellable' })
  })

  it.each(['hold 60000', 'deaf 60000'])('ends a running one at once and frees its thread (%s)', async (behaviour) => {
    start({ threads: 1 })
    const run = await request(behaviour)
    await until(
      () => getRun(groupId, run.id),
      ({ state }) => state === 'running',
    )
    const begun = performance.now()
    expect(await cancelRun(groupId, run.id)).toMatchObject({ state: 'cancelled' })
    expect(performance.now() - begun).toBeLessThan(1000)
    // The only thread takes the next run only when it is free again.
    const next = await request('hold 1')
    await ended(next.id)
    expect(performance.now() - begun).toBeLessThan(5000)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'cancelled', summary: null })
    expect(await attemptsOf(run.id)).toEqual([])
  })

  it('and starting meet without a deadlock, and one of them wins', async () => {
    start()
    const runs = await Promise.all(Array.from({ length: 12 }, () => request('hold 20')))
    const outcomes = await Promise.allSettled(runs.map(({ id }) => cancelRun(groupId, id)))
    for (const [index, outcome] of outcomes.entries()) {
      const run = await ended(runs[index]!.id)
      if (outcome.status === 'fulfilled') expect(run.state).toBe('cancelled')
      else expect([run.state, (outcome.reason as { code: string }).code]).toEqual(['done', 'run/not-cancellable'])
    }
  })
})

describe('running again', () => {
  it('uses the same run with a new entry and a new attempt', async () => {
    const run = await request('hold 10')
    await cancelRun(groupId, run.id)
    const again = await retryRun({ groupId, userId, runId: run.id })
    expect(again).toMatchObject({ id: run.id, state: 'queued', failure: null, finishedAt: null })
    await expect(retryRun({ groupId, userId, runId: run.id })).rejects.toMatchObject({ code: 'run/not-retryable' })
    start()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
    await expect(retryRun({ groupId, userId, runId: run.id })).rejects.toMatchObject({ code: 'run/not-retryable' })
  })

  it('gives up after three lost threads, while other runs go on', async () => {
    start()
    const poison = await request('exit')
    const good = await Promise.all(Array.from({ length: 5 }, () => request('hold 5')))
    for (const run of good) expect((await ended(run.id)).state).toBe('done')
    const failed = await ended(poison.id)
    expect(failed).toMatchObject({ state: 'failed', attempt: 3, failure: { code: 'run/worker-lost' } })
    await retryRun({ groupId, userId, runId: poison.id })
    expect(await ended(poison.id)).toMatchObject({ state: 'failed', attempt: 6 })
  })

  it('fails a run that passes its time limit', async () => {
    start({ runLimitMs: 200 })
    const run = await ended((await request('deaf 60000')).id)
    expect(run).toMatchObject({ state: 'failed', failure: { code: 'run/time-limit' } })
  })
})

/** Takes the next entry of the queue as a process would that never comes back. */
const takeAs = (workerId: string) =>
  withTransaction(async (tx, client) => {
    const ticket = await queue.take(client, 'simulate')
    if (!ticket) throw new Error('expected an entry in the queue')
    const payload = ticket.data as { groupId: string; runId: string }
    const claim = await claimRun({ tx, client }, { id: ticket.id, turn: ticket.turn, payload }, workerId)
    if (!claim) throw new Error('expected the run to be claimed')
    return claim
  })

const emptySummary = {
  engineVersion: '1',
  temperaturesK: [4],
  waitingTimesPs: [0],
  linearGrid: [],
  mapGrid: [],
  warnings: ['late'],
  quantities: [],
  broadeningError: 0,
  arrays: [],
}

describe('an attempt whose process is gone', () => {
  it('is taken over when its heartbeat is old, and can write nothing afterwards', async () => {
    const run = await request('hold 50')
    const zombie = await takeAs('elsewhere/1/frozen')
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'running', attempt: 1 })
    start()
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 2 })
    const before = await getRun(groupId, run.id)
    expect(await recordProgress(zombie, 0.5, 1)).toBe(false)
    expect(await finishRun(zombie, { summary: emptySummary, arrays: [], computeMs: 1 })).toBe(false)
    expect(await returnRun(zombie)).toBe(false)
    expect(await getRun(groupId, run.id)).toEqual(before)
    expect(await countResults()).toBe(1)
  })

  it('cannot write while its successor computes', async () => {
    const run = await request('hold 1500')
    const zombie = await takeAs('elsewhere/1/frozen')
    start()
    await until(
      () => getRun(groupId, run.id),
      ({ attempt, state }) => attempt === 2 && state === 'running',
    )
    expect(await finishRun(zombie, { summary: emptySummary, arrays: [], computeMs: 1 })).toBe(false)
    expect(await recordProgress(zombie, 0.99, 1)).toBe(false)
    const done = await ended(run.id)
    expect(done).toMatchObject({ state: 'done', attempt: 2 })
    expect(done.summary?.warnings).toEqual([])
  })

  it('is not taken over while it sends heartbeats', async () => {
    start({ threads: 1, heartbeatMs: 100, heartbeatStaleMs: 400, rescueMs: 50 })
    const run = await request('deaf 1500')
    expect(await ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
  })
})

describe('a process that ends', () => {
  it('hands its runs back without counting them as lost', async () => {
    start()
    const run = await request('hold 60000')
    await until(
      () => getRun(groupId, run.id),
      ({ state }) => state === 'running',
    )
    const begun = performance.now()
    await stop()
    expect(performance.now() - begun).toBeLessThan(5000)
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'queued', attempt: 1, queuePlace: 1 })
    expect(await attemptsOf(run.id)).toEqual([])
    for (let round = 0; round < 3; round++) {
      start()
      await until(
        () => getRun(groupId, run.id),
        ({ state }) => state === 'running',
      )
      await stop()
    }
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'queued', attempt: 4 })
    await cancelRun(groupId, run.id)
  })
})

describe('rights', () => {
  it('are looked at again when a run starts', async () => {
    const guest = await bench.addUser('Guest')
    await bench.addMember(groupId, guest, 'editor')
    const run = await request('hold 10', groupId, guest)
    await bench.sql(`delete from memberships where user_id = $1`, [guest])
    start()
    expect(await ended(run.id)).toMatchObject({ state: 'failed', attempt: 0, failure: { code: 'group/role' } })
  })

  it('and again before its result is stored', async () => {
    const guest = await bench.addUser('Guest')
    await bench.addMember(groupId, guest, 'editor')
    start()
    const run = await request('hold 800', groupId, guest)
    await until(
      () => getRun(groupId, run.id),
      ({ state }) => state === 'running',
    )
    await bench.sql(`update users set disabled_at = now() where id = $1`, [guest])
    expect(await ended(run.id)).toMatchObject({ state: 'failed', failure: { code: 'group/role' }, summary: null })
    expect(await countResults()).toBe(0)
  })
})

describe('the queue', () => {
  it('lets groups take turns, whatever one of them has queued before', async () => {
    const many = await Promise.all(Array.from({ length: 30 }, () => request('hold 5')))
    const others = await Promise.all([0, 1, 2].map(() => bench.addGroup(userId)))
    const late = await Promise.all(others.map((group) => request('hold 5', group)))
    for (const run of late) expect(run.queuePlace).toBeLessThanOrEqual(5)
    start({ threads: 1 })
    const lateEnds = await Promise.all(late.map((run, index) => ended(run.id, others[index])))
    const ends = await Promise.all(many.map((run) => ended(run.id)))
    const lastOfLate = Math.max(...lateEnds.map((run) => Date.parse(run.startedAt!)))
    expect(ends.filter((run) => Date.parse(run.startedAt!) < lastOfLate).length).toBeLessThanOrEqual(4)
  })

  it('shows places that follow the order of service', async () => {
    const runs = []
    for (let index = 0; index < 4; index++) runs.push(await request('hold 1'))
    const places = new Map((await listRuns(groupId, {})).map((run) => [run.id, run.queuePlace]))
    expect(runs.map((run) => places.get(run.id))).toEqual([1, 2, 3, 4])
    start({ threads: 1 })
    const ends = await Promise.all(runs.map((run) => ended(run.id)))
    const startedAt = ends.map((run) => Date.parse(run.startedAt!))
    expect([...startedAt].sort((a, b) => a - b)).toEqual(startedAt)
  })

  it('passes over an entry that says nothing it understands', async () => {
    const [row] = await bench.sql<{ id: string }>(
      `insert into queue.job (name, data, priority) values ('simulate', '{"hello": 1}', 10) returning id`,
    )
    start()
    expect((await ended((await request('hold 1')).id)).state).toBe('done')
    const [after] = await bench.sql(`select state from queue.job where id = $1`, [row!.id])
    expect(after).toEqual({ state: 'completed' })
  })

  it('holds ids only', async () => {
    await request('hold 1')
    const rows = await bench.sql<{ data: object; output: unknown }>(`select data, output from queue.job`)
    for (const row of rows) expect(JSON.stringify(row).length).toBeLessThan(200)
  })

  it('gives new entries to waiting runs that lost theirs', async () => {
    const run = await request('hold 1')
    await bench.sql(`delete from queue.job where data->>'runId' = $1`, [run.id])
    expect(await getRun(groupId, run.id)).toMatchObject({ state: 'queued' })
    expect(await reconcileRuns()).toBe(1)
    expect(await reconcileRuns()).toBe(0)
    start()
    expect(await ended(run.id)).toMatchObject({ state: 'done' })
  })

  it('never answers a request without having queued it', async () => {
    const setId = await bench.addTrial(groupId, userId, 'hold 1')
    await bench.sql(`alter table queue.job rename to hidden`)
    try {
      await expect(createRun({ groupId, userId, setId, version: 1 })).rejects.toThrow()
    } finally {
      await bench.sql(`alter table queue.hidden rename to job`)
    }
    expect(await listRuns(groupId, {})).toEqual([])
  })
})
