import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { closePool } from '../../server/database/client'
import { stopListening } from '../../server/database/notifications'
import { withGroup } from '../../server/database/with-group'
import { startQueue, stopQueue } from '../../server/jobs/queue'
import { createRun, getRun } from '../../server/services/runs.service'
import { startServer, type BuiltServer } from '../support/server'
import { compileTrialWorkers, openWorkbench, until, type Workbench } from '../api/jobs/workbench'
import { isFull, print, quantile } from './drill'

/** One group queues very many short runs, nine others one each: the others start soon, and the server goes on answering. */
const backlog = isFull ? 10_000 : 2000
const others = 9

let bench: Workbench
let trial: Awaited<ReturnType<typeof compileTrialWorkers>>
let server: BuiltServer | undefined

beforeAll(async () => {
  trial = await compileTrialWorkers()
  bench = await openWorkbench()
  process.env.DATABASE_URL = bench.databaseUrl
  await startQueue()
})

afterAll(async () => {
  await server?.stop('SIGKILL')
  await stopQueue()
  await stopListening()
  await closePool()
  await bench?.close()
  await trial?.remove()
})

/** Versions of one set that differ in one number, written in one statement. */
const addVersions = (groupId: string, setId: string) =>
  withGroup(groupId, (_tx, client) =>
    client.query(
      `insert into parameter_set_versions (group_id, set_id, version, parameters, content_hash, created_by)
       select group_id, set_id, n, jsonb_set(parameters, '{zeroPhononEnergyMeV}', to_jsonb(1000 + n)), 'v' || n, created_by
       from parameter_set_versions, generate_series(2, $2) as n where set_id = $1 and version = 1`,
      [setId, backlog],
    ),
  )

const countDone = (groupId: string) =>
  withGroup(groupId, async (_tx, client) => {
    const { rows } = await client.query<{ done: number }>(`select count(*)::int as done from runs where state = 'done'`)
    return rows[0]?.done ?? 0
  })

const rssMb = (text: string) => Number(/VmRSS:\s+(\d+)/.exec(text)?.[1]) / 1024

describe('a backlog of one group', () => {
  it('leaves room for the others', async () => {
    const { readFileSync } = await import('node:fs')
    const userId = await bench.addUser('Ada')
    const groupId = await bench.addGroup(userId)
    const setId = await bench.addTrial(groupId, userId, 'hold 0')
    await addVersions(groupId, setId)
    let begun = performance.now()
    const versions = Array.from({ length: backlog }, (_, index) => index + 1)
    await Promise.all(
      Array.from({ length: 8 }, async () => {
        for (let version = versions.pop(); version; version = versions.pop()) {
          await createRun({ groupId, userId, setId, version })
        }
      }),
    )
    const enqueueMs = performance.now() - begun

    server = await startServer({ env: { DATABASE_URL: bench.databaseUrl, WORKERS_DIR: trial.directory } })
    const status = `/proc/${server.process.pid}/status`
    const rssBefore = rssMb(readFileSync(status, 'utf8'))
    begun = performance.now()
    const small = await Promise.all(
      Array.from({ length: others }, async () => {
        const group = await bench.addGroup(userId)
        const own = await bench.addTrial(group, userId, 'hold 0')
        const asked = performance.now()
        const run = await createRun({ groupId: group, userId, setId: own, version: 1 })
        await until(
          () => getRun(group, run.id),
          ({ state }) => state === 'done',
          120_000,
        )
        return performance.now() - asked
      }),
    )
    const answers: number[] = []
    const doneBefore = await countDone(groupId)
    const measured = performance.now()
    while (performance.now() - measured < 20_000) {
      const asked = performance.now()
      await fetch(`${server.baseUrl}/api/health/ready`)
      answers.push(performance.now() - asked)
      await new Promise((done) => setTimeout(done, 100))
    }
    const done = (await countDone(groupId)) - doneBefore
    const figures = {
      enqueueMs: Math.round(enqueueMs),
      othersMs: Math.round(Math.max(...small)),
      answerP95Ms: Math.round(quantile(answers, 0.95)),
      runsPerSecond: Math.round((10 * done) / ((performance.now() - measured) / 1000)) / 10,
      rssGrowthMb: Math.round(rssMb(readFileSync(status, 'utf8')) - rssBefore),
    }
    print(`backlog of ${backlog}`, figures)
    expect(figures.othersMs).toBeLessThan(30_000)
    expect(figures.answerP95Ms).toBeLessThan(300)
    expect(figures.rssGrowthMb).toBeLessThan(100)
  })
})
