import pg from 'pg'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { closePool, getPool } from '../../../server/database/client'
import { stopListening } from '../../../server/database/notifications'
import { withTransaction } from '../../../server/database/transaction'
import { queue, startQueue, stopQueue } from '../../../server/jobs/queue'
import {
  claimRun,
  failRun,
  finishRun,
  loseRun,
  recordProgress,
  rescueRun,
  returnRun,
  type RunClaim,
} from '../../../server/services/run-execution.service'
import { cancelRun, createRun, getRun, retryRun } from '../../../server/services/runs.service'
import { openWorkbench, type Workbench } from './workbench'

/**
 * Every statement of every step of a run is made to fail once, the first, the second and so on, until the step gets
 * through untouched. Whatever failed, rows and queue must tell one story, and no client may be left behind.
 */
let bench: Workbench
let userId: string
let groupId: string

/** Statements left until one fails; undefined: none fails. `cut`: the connection goes with it. */
let fuse: { left: number; cut: boolean } | undefined
const query = pg.Client.prototype.query

beforeAll(async () => {
  bench = await openWorkbench()
  process.env.DATABASE_URL = bench.databaseUrl
  // Makes the queue's tables; stopped, because its maintenance would take clients of the pool that are counted here.
  await startQueue()
  await stopQueue()
  pg.Client.prototype.query = function (this: pg.Client, ...parameters: unknown[]) {
    if (fuse && fuse.left-- === 0) {
      if (fuse.cut) (this as unknown as { connection: { stream: { destroy(): void } } }).connection.stream.destroy()
      fuse = undefined
      return Promise.reject(Object.assign(new Error('the statement failed on purpose'), { code: '57P01' }))
    }
    return Reflect.apply(query, this, parameters)
  } as typeof query
})

beforeEach(async () => {
  userId = await bench.addUser('Ada')
  groupId = await bench.addGroup(userId)
})

afterAll(async () => {
  pg.Client.prototype.query = query
  await stopListening()
  await closePool()
  await bench?.close()
})

const takeRun = () =>
  withTransaction(async (tx, client) => {
    const ticket = await queue.take(client, 'simulate')
    if (!ticket) return null
    const payload = ticket.data as { groupId: string; runId: string }
    return claimRun({ tx, client }, { id: ticket.id, turn: ticket.turn, payload }, 'elsewhere/1/test')
  })

const newRun = async () => {
  const setId = await bench.addTrial(groupId, userId, 'hold 1')
  return createRun({ groupId, userId, setId, version: 1 })
}
const newClaim = async (): Promise<RunClaim> => {
  await newRun()
  const claim = await takeRun()
  if (!claim) throw new Error('expected a claim')
  return claim
}

const summary = {
  engineVersion: '1',
  temperaturesK: [4],
  waitingTimesPs: [0],
  linearGrid: [],
  mapGrid: [],
  warnings: [],
  notes: [],
  quantities: [],
  broadeningError: 0,
  arrays: [],
}
const array = (key: string) => ({
  key,
  dataType: 'float64' as const,
  shape: [1],
  unit: 'meV',
  sha256: '0'.repeat(64),
  bytes: Buffer.alloc(8),
})

/** Rows, queue and attempts tell the same story about every run of the group. */
const checkStory = async () => {
  const rows = await withTransaction(async (_tx, client) => {
    await client.query(`select set_config('app.group_id', $1, true)`, [groupId])
    const answer = await client.query<Record<string, unknown>>(
      `select r.id, r.state, r.result_id is not null as stored, j.state as entry, a.attempt as attempt, r.attempt as own,
              (select count(*)::int from queue.job other
               where other.data->>'runId' = r.id::text and other.state <= 'active') as entries,
              (select count(*)::int from result_arrays where result_id = r.result_id) as arrays
       from runs r
       left join queue.job j on j.id = r.job_id and j.name = 'simulate'
       left join run_attempts a on a.run_id = r.id`,
    )
    return answer.rows
  })
  for (const row of rows) {
    const told = { entry: row.entry, entries: row.entries, attempt: row.attempt, stored: row.stored }
    if (row.state === 'queued') {
      expect(told).toMatchObject({ entries: 1, attempt: null, stored: false })
      expect(['created', 'retry']).toContain(row.entry)
    } else if (row.state === 'running') {
      expect(told).toEqual({ entry: 'active', entries: 1, attempt: row.own, stored: false })
    } else {
      expect(told).toMatchObject({ entries: 0, attempt: null, stored: row.state === 'done' })
      if (row.state === 'done') expect(row.arrays).toBe(2)
    }
  }
  const orphans = await bench.sql(
    `select id from queue.job where data->>'groupId' = $1 and state <= 'active'
     and not (data->>'runId' = any($2::text[]))`,
    [groupId, rows.map((row) => row.id)],
  )
  expect(orphans).toEqual([])
  const pool = getPool()
  expect(pool.totalCount - pool.idleCount).toBe(0)
  return rows
}

interface Step {
  name: string
  /** Makes what the step works on; answers the step itself. */
  prepare: () => Promise<() => Promise<unknown>>
}

const steps: Step[] = [
  {
    name: 'asking for a run',
    prepare: async () => {
      const setId = await bench.addTrial(groupId, userId, 'hold 1')
      return () => createRun({ groupId, userId, setId, version: 1 })
    },
  },
  {
    name: 'cancelling a waiting run',
    prepare: async () => {
      const run = await newRun()
      return () => cancelRun(groupId, run.id)
    },
  },
  {
    name: 'cancelling a running run',
    prepare: async () => {
      const claim = await newClaim()
      return () => cancelRun(groupId, claim.runId)
    },
  },
  {
    name: 'running again',
    prepare: async () => {
      const run = await newRun()
      await cancelRun(groupId, run.id)
      return () => retryRun({ groupId, userId, runId: run.id })
    },
  },
  {
    name: 'taking a run from the queue',
    prepare: async () => {
      await newRun()
      return takeRun
    },
  },
  {
    name: 'writing progress',
    prepare: async () => {
      const claim = await newClaim()
      return () => recordProgress(claim, 0.5, 3)
    },
  },
  {
    name: 'storing a result',
    prepare: async () => {
      const claim = await newClaim()
      return () => finishRun(claim, { summary, arrays: [array('a'), array('b')], computeMs: 1 })
    },
  },
  {
    name: 'storing a failure',
    prepare: async () => {
      const claim = await newClaim()
      return () => failRun(claim, { code: 'run/failed', message: 'x' })
    },
  },
  {
    name: 'handing a run back',
    prepare: async () => {
      const claim = await newClaim()
      return () => returnRun(claim)
    },
  },
  {
    name: 'losing a thread',
    prepare: async () => {
      const claim = await newClaim()
      return () => loseRun(claim)
    },
  },
  {
    name: 'rescuing a run',
    prepare: async () => {
      const claim = await newClaim()
      return () => rescueRun(claim, () => true)
    },
  },
]

describe.each(steps)('$name', ({ prepare }) => {
  it.each([false, true])('leaves one story whichever statement fails (connection lost: %s)', async (cut) => {
    let failures = 0
    for (let nth = 0; ; nth++) {
      expect(nth).toBeLessThan(80)
      // Entries of earlier rounds would be taken instead of the new one.
      await bench.sql(`delete from queue.job where state < 'active'`)
      groupId = await bench.addGroup(userId)
      const step = await prepare()
      const before = await checkStory()
      fuse = { left: nth, cut }
      const outcome = await step().then(
        (value) => ({ value }),
        (error: unknown) => ({ error }),
      )
      const untouched = fuse !== undefined
      fuse = undefined
      const after = await checkStory()
      if (untouched) {
        expect(outcome).toHaveProperty('value')
        break
      }
      // Refused as a whole: the rows are those of before. Only a failed COMMIT leaves open what became of it.
      if ('error' in outcome) {
        failures += 1
        expect(after).toEqual(before)
        // And it can be done again at once.
        await step()
        await checkStory()
      }
    }
    expect(failures).toBeGreaterThanOrEqual(4)
  })
})

describe('a run that could not be read', () => {
  it('is not answered half', async () => {
    const run = await newRun()
    for (let nth = 0; nth < 4; nth++) {
      fuse = { left: nth, cut: false }
      await expect(getRun(groupId, run.id)).rejects.toThrow()
      fuse = undefined
    }
  })
})
