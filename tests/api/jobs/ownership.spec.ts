import { describe, expect, it } from 'vitest'
import { withTransaction } from '../../../server/database/transaction'
import { queue } from '../../../server/jobs/queue'
import { claimRun, finishRun, recordProgress, returnRun } from '../../../server/services/run-execution.service'
import { cancelRun, getRun } from '../../../server/services/runs.service'
import { inProcess } from './in-process'
import { until } from './workbench'

const stage = inProcess()

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
  notes: [],
  quantities: [],
  broadeningError: 0,
  arrays: [],
}

describe('an attempt whose process is gone', () => {
  it('is taken over when its heartbeat is old, and can write nothing afterwards', async () => {
    const run = await stage.request('hold 50')
    const zombie = await takeAs('elsewhere/1/frozen')
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'running', attempt: 1 })
    stage.start()
    expect(await stage.ended(run.id)).toMatchObject({ state: 'done', attempt: 2 })
    const before = await getRun(stage.groupId, run.id)
    expect(await recordProgress(zombie, 0.5, 1)).toBe(false)
    expect(await finishRun(zombie, { summary: emptySummary, arrays: [], computeMs: 1 })).toBe(false)
    expect(await returnRun(zombie)).toBe(false)
    expect(await getRun(stage.groupId, run.id)).toEqual(before)
    expect(await stage.countResults()).toBe(1)
  })

  it('cannot write while its successor computes', async () => {
    const run = await stage.request('hold 1500')
    const zombie = await takeAs('elsewhere/1/frozen')
    stage.start()
    await until(
      () => getRun(stage.groupId, run.id),
      ({ attempt, state }) => attempt === 2 && state === 'running',
    )
    expect(await finishRun(zombie, { summary: emptySummary, arrays: [], computeMs: 1 })).toBe(false)
    expect(await recordProgress(zombie, 0.99, 1)).toBe(false)
    const done = await stage.ended(run.id)
    expect(done).toMatchObject({ state: 'done', attempt: 2 })
    expect(done.summary?.warnings).toEqual([])
  })

  it('is not taken over while it sends heartbeats', async () => {
    stage.start({ threads: 1, heartbeatMs: 100, heartbeatStaleMs: 400, rescueMs: 50 })
    const run = await stage.request('deaf 1500')
    expect(await stage.ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
  })
})

describe('a process that ends', () => {
  it('hands its runs back without counting them as lost', async () => {
    stage.start()
    const run = await stage.request('hold 60000')
    await stage.running(run.id)
    const begun = performance.now()
    await stage.stop()
    expect(performance.now() - begun).toBeLessThan(5000)
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'queued', attempt: 1, queuePlace: 1 })
    expect(await stage.attemptsOf(run.id)).toEqual([])
    for (let round = 0; round < 3; round++) {
      stage.start()
      await stage.running(run.id)
      await stage.stop()
    }
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'queued', attempt: 4 })
    await cancelRun(stage.groupId, run.id)
  })
})

describe('rights', () => {
  it('are looked at again when a run starts', async () => {
    const guest = await stage.bench.addUser('Guest')
    await stage.bench.addMember(stage.groupId, guest, 'editor')
    const run = await stage.request('hold 10', stage.groupId, guest)
    await stage.bench.sql(`delete from memberships where user_id = $1`, [guest])
    stage.start()
    expect(await stage.ended(run.id)).toMatchObject({ state: 'failed', attempt: 0, failure: { code: 'group/role' } })
  })

  it('and again before its result is stored', async () => {
    const guest = await stage.bench.addUser('Guest')
    await stage.bench.addMember(stage.groupId, guest, 'editor')
    stage.start()
    const run = await stage.request('hold 800', stage.groupId, guest)
    await stage.running(run.id)
    await stage.bench.sql(`update users set disabled_at = now() where id = $1`, [guest])
    expect(await stage.ended(run.id)).toMatchObject({ state: 'failed', failure: { code: 'group/role' }, summary: null })
    expect(await stage.countResults()).toBe(0)
  })
})
