import { describe, expect, it } from 'vitest'
import { onNotice, type Notices } from '../../../server/database/notifications'
import { cancelRun, createRun, getRun, readArray, retryRun } from '../../../server/services/runs.service'
import { inProcess } from './in-process'

const stage = inProcess()

describe('a run', () => {
  it('waits, computes with progress that never falls, and is stored with its arrays', async () => {
    const heard: Notices['run'][0][] = []
    const off = onNotice('run', (notice) => heard.push(notice))
    const queued = await stage.request('hold 1500')
    expect(queued).toMatchObject({ state: 'queued', queuePlace: 1, progress: 0, attempt: 0, summary: null })
    stage.start()
    const run = await stage.ended(queued.id)
    off()
    expect(run).toMatchObject({ state: 'done', progress: 1, secondsLeft: null, attempt: 1, failure: null })
    expect(run.computeMs).toBeGreaterThan(1400)
    expect(run.summary?.arrays.map(({ key }) => key)).toEqual(['absorption/0'])
    const array = await readArray(stage.groupId, run.id, 'absorption/0')
    expect(new Float64Array(Uint8Array.from(array.bytes).buffer)[0]).toBe(0)
    expect(array).toMatchObject({ dataType: 'float64', shape: [256], unit: '1/meV' })
    expect(await stage.attemptsOf(run.id)).toEqual([])

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
    stage.start()
    const run = await stage.ended((await stage.request('refuse')).id)
    expect(run).toMatchObject({ state: 'failed', failure: { code: 'engine/invalid', message: 'refused by the trial' } })
    await expect(readArray(stage.groupId, run.id, 'absorption/0')).rejects.toMatchObject({ code: 'run/no-result' })
  })

  it('is computed once for equal input: asked twice, asked later, asked for another version of equal content', async () => {
    const setId = await stage.bench.addTrial(stage.groupId, stage.userId, 'hold 300')
    const asked = await Promise.all(
      Array.from({ length: 20 }, () => createRun({ groupId: stage.groupId, userId: stage.userId, setId, version: 1 })),
    )
    expect(new Set(asked.map(({ id }) => id)).size).toBe(1)
    stage.start()
    const first = await stage.ended(asked[0]!.id)
    const later = await createRun({ groupId: stage.groupId, userId: stage.userId, setId, version: 1 })
    expect(later.id).not.toBe(first.id)
    expect(later).toMatchObject({ state: 'done', progress: 1, attempt: 0, inputHash: first.inputHash })
    expect(later.summary).toEqual(first.summary)
    expect(await stage.countResults()).toBe(1)
  })

  it('waits for an equal run of another set that is being computed, and shares its result', async () => {
    const change = { zeroPhononEnergyMeV: 1234.5, modes: [{ label: 'hold 700', energyMeV: 5, huangRhys: 0.1 }] }
    const sets = [
      await stage.bench.addSet(stage.groupId, stage.userId, change),
      await stage.bench.addSet(stage.groupId, stage.userId, change),
    ]
    const runs = await Promise.all(
      sets.map((setId) => createRun({ groupId: stage.groupId, userId: stage.userId, setId, version: 1 })),
    )
    stage.start()
    const [one, two] = await Promise.all(runs.map(({ id }) => stage.ended(id)))
    expect([one!.attempt, two!.attempt].sort()).toEqual([0, 1])
    expect(one!.inputHash).toBe(two!.inputHash)
    expect(await stage.countResults()).toBe(1)
  })

  it('does not share results between groups', async () => {
    const other = await stage.bench.addGroup(stage.userId)
    const change = { zeroPhononEnergyMeV: 1111, modes: [{ label: 'hold 10', energyMeV: 5, huangRhys: 0.1 }] }
    const mine = await createRun({
      groupId: stage.groupId,
      userId: stage.userId,
      setId: await stage.bench.addSet(stage.groupId, stage.userId, change),
      version: 1,
    })
    stage.start()
    await stage.ended(mine.id)
    const setId = await stage.bench.addSet(other, stage.userId, change)
    const theirs = await createRun({ groupId: other, userId: stage.userId, setId, version: 1 })
    expect(theirs).toMatchObject({ state: 'queued', inputHash: mine.inputHash })
    expect(await stage.ended(theirs.id, other)).toMatchObject({ state: 'done', attempt: 1 })
    await expect(getRun(other, mine.id)).rejects.toMatchObject({ code: 'request/not-found' })
    await expect(readArray(other, mine.id, 'absorption/0')).rejects.toMatchObject({ code: 'request/not-found' })
  })
})

describe('cancelling', () => {
  it('ends a waiting run for good', async () => {
    const run = await stage.request('hold 10')
    expect(await cancelRun(stage.groupId, run.id)).toMatchObject({ state: 'cancelled' })
    stage.start()
    const next = await stage.request('hold 10')
    await stage.ended(next.id)
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'cancelled', attempt: 0, startedAt: null })
    await expect(cancelRun(stage.groupId, run.id)).rejects.toMatchObject({ code: 'run/not-cancellable' })
  })

  it.each(['hold 60000', 'deaf 60000'])('ends a running one at once and frees its thread (%s)', async (behaviour) => {
    stage.start({ threads: 1 })
    const run = await stage.request(behaviour)
    await stage.running(run.id)
    const begun = performance.now()
    expect(await cancelRun(stage.groupId, run.id)).toMatchObject({ state: 'cancelled' })
    expect(performance.now() - begun).toBeLessThan(1000)
    // The only thread takes the next run only when it is free again.
    const next = await stage.request('hold 1')
    await stage.ended(next.id)
    expect(performance.now() - begun).toBeLessThan(5000)
    expect(await getRun(stage.groupId, run.id)).toMatchObject({ state: 'cancelled', summary: null })
    expect(await stage.attemptsOf(run.id)).toEqual([])
  })

  it('and starting meet without a deadlock, and one of them wins', async () => {
    stage.start()
    const runs = await Promise.all(Array.from({ length: 12 }, () => stage.request('hold 20')))
    const outcomes = await Promise.allSettled(runs.map(({ id }) => cancelRun(stage.groupId, id)))
    for (const [index, outcome] of outcomes.entries()) {
      const run = await stage.ended(runs[index]!.id)
      if (outcome.status === 'fulfilled') expect(run.state).toBe('cancelled')
      else expect([run.state, (outcome.reason as { code: string }).code]).toEqual(['done', 'run/not-cancellable'])
    }
  })
})

describe('running again', () => {
  it('uses the same run with a new entry and a new attempt', async () => {
    const run = await stage.request('hold 10')
    await cancelRun(stage.groupId, run.id)
    const again = await retryRun({ groupId: stage.groupId, userId: stage.userId, runId: run.id })
    expect(again).toMatchObject({ id: run.id, state: 'queued', failure: null, finishedAt: null })
    await expect(retryRun({ groupId: stage.groupId, userId: stage.userId, runId: run.id })).rejects.toMatchObject({
      code: 'run/not-retryable',
    })
    stage.start()
    expect(await stage.ended(run.id)).toMatchObject({ state: 'done', attempt: 1 })
    await expect(retryRun({ groupId: stage.groupId, userId: stage.userId, runId: run.id })).rejects.toMatchObject({
      code: 'run/not-retryable',
    })
  })

  it('gives up after three lost threads, while other runs go on', async () => {
    stage.start()
    const poison = await stage.request('exit')
    const good = await Promise.all(Array.from({ length: 5 }, () => stage.request('hold 5')))
    for (const run of good) expect((await stage.ended(run.id)).state).toBe('done')
    const failed = await stage.ended(poison.id)
    expect(failed).toMatchObject({ state: 'failed', attempt: 3, failure: { code: 'run/worker-lost' } })
    await retryRun({ groupId: stage.groupId, userId: stage.userId, runId: poison.id })
    expect(await stage.ended(poison.id)).toMatchObject({ state: 'failed', attempt: 6 })
  })

  it('fails a run that passes its time limit', async () => {
    stage.start({ runLimitMs: 200 })
    const run = await stage.ended((await stage.request('deaf 60000')).id)
    expect(run).toMatchObject({ state: 'failed', failure: { code: 'run/time-limit' } })
  })
})
