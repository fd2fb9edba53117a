import { describe, expect, it } from 'vitest'
import { reconcileRuns } from '../../../server/services/run-reconcile.service'
import { createRun, getRun, listRuns } from '../../../server/services/runs.service'
import { inProcess } from './in-process'

const stage = inProcess()

describe('the queue', () => {
  it('lets groups take turns, whatever one of them has queued before', async () => {
    const many = []
    for (let index = 0; index < 16; index++) many.push(await stage.request('hold 5'))
    const late = []
    for (let index = 0; index < 3; index++) {
      const group = await stage.bench.addGroup(stage.userId)
      late.push({ group, run: await stage.request('hold 5', group) })
    }
    for (const { run } of late) expect(run.queuePlace).toBeLessThanOrEqual(5)
    stage.start({ threads: 1 })
    const startOf = ({ startedAt }: { startedAt: string | null }) => Date.parse(startedAt ?? '')
    let lastOfLate = 0
    for (const { group, run } of late) {
      lastOfLate = Math.max(lastOfLate, startOf(await stage.ended(run.id, group)))
    }
    const ends = []
    for (const run of many) ends.push(await stage.ended(run.id))
    expect(ends.filter((run) => startOf(run) < lastOfLate).length).toBeLessThanOrEqual(4)
  })

  it('shows places that follow the order of service', async () => {
    const runs = []
    for (let index = 0; index < 4; index++) runs.push(await stage.request('hold 1'))
    const places = new Map((await listRuns(stage.groupId, {})).map((run) => [run.id, run.queuePlace]))
    expect(runs.map((run) => places.get(run.id))).toEqual([1, 2, 3, 4])
    stage.start({ threads: 1 })
    const ends = await Promise.all(runs.map((run) => stage.ended(run.id)))
    const startedAt = ends.map((run) => Date.parse(run.startedAt!))
    expect([...startedAt].sort((a, b) => a - b)).toEqual(startedAt)
  })

  it('passes over an entry that says nothing it understands', async () => {
    const [row] = await stage.bench.sql<{ id: string }>(
      `insert into queue.job (name, data, priority) values ('simulate', '{"hello": 1}', 10) returning id`,
    )
    stage.start()
    expect((await stage.ended((await stage.request('hold 1')).id)).state).toBe('done')
    const [after] = await stage.bench.sql(`select state from queue.job where id = $1`, [row!.id])
    expect(after).toEqual({ state: 'completed' })
  })

  it('holds ids only', async () => {
    await stage.request('hold 1')
    const rows = await stage.bench.sql<{ data: object; output: unknown }>(`select data, output from queue.job`)
    for (const row of rows) expect(JSON.stringify(row).length).toBeLessThan(200)
  })

  it('gives new entries to waiting runs that lost theirs', async () => {
    const run = await stage.request('hold 1')
    await stage.bench.sql(`delete from queue.job where data->>'runId' = $1`, [run.id])
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'queued' })
    expect(await reconcileRuns()).toBe(1)
    expect(await reconcileRuns()).toBe(0)
    stage.start()
    expect(await stage.ended(run.id)).toMatchObject({ state: 'done' })
  })

  it('never answers a request without having queued it', async () => {
    const setId = await stage.bench.addTrial(stage.groupId, stage.userId, 'hold 1')
    await stage.bench.sql(`alter table queue.job rename to hidden`)
    try {
      await expect(createRun({ groupId: stage.groupId, userId: stage.userId, setId, version: 1 })).rejects.toThrow()
    } finally {
      await stage.bench.sql(`alter table queue.hidden rename to job`)
    }
    expect(await listRuns(stage.groupId, {})).toEqual([])
  })

  it('says so when the queue itself is missing, which the package answers with a silent null', async () => {
    const setId = await stage.bench.addTrial(stage.groupId, stage.userId, 'hold 1')
    const ask = () => createRun({ groupId: stage.groupId, userId: stage.userId, setId, version: 1 })
    await stage.bench.sql(`delete from queue.job`)
    await stage.bench.sql(`update queue.queue set name = 'elsewhere' where name = 'simulate'`)
    try {
      await expect(ask()).rejects.toMatchObject({ code: 'service/unavailable' })
    } finally {
      await stage.bench.sql(`update queue.queue set name = 'simulate' where name = 'elsewhere'`)
    }
    expect(await listRuns(stage.groupId, {})).toEqual([])
    expect(await ask()).toMatchObject({ state: 'queued' })
  })
})
