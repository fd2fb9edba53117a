import { randomUUID } from 'node:crypto'
import { expect } from 'vitest'
import type { ParameterSetInput } from '../../../shared/schemas/parameter-set'
import { sql } from './database'
import { makeFile, makeMeasurement } from './files'
import type { Person } from './people'

/** A small, quick parameter set. */
export const smallSet = (changes: Partial<ParameterSetInput> = {}): ParameterSetInput => ({
  zeroPhononEnergyMeV: 2000,
  bath: [{ kind: 'powerLaw', couplingStrength: 0.05, exponent: 3, cutoffEnergyMeV: 3, cutoffShape: 'gaussian' }],
  modes: [{ label: 'breathing', energyMeV: 25, huangRhys: 0.1 }],
  zeroPhononFwhmMeV: 0.5,
  temperaturesK: [10],
  waitingTimesPs: [0],
  ...changes,
})

/** Ids that stand in the paths of the policy table. */
export interface ObjectIds {
  groupId: string
  setId: string
  sessionId: string
  runId: string
  /** The same id as `runId`, for routes that need a run in a certain state. */
  cancelledRunId: string
  doneRunId: string
  fileId: string
  measurementId: string
}
export type ObjectKind = Exclude<keyof ObjectIds, 'groupId'>

/** Makes one object of a kind and answers its id, and the ids of what it rests on. */
export type ObjectMaker = (context: { groupId: string; owner: Person }) => Promise<Partial<ObjectIds>>

const makeSet: ObjectMaker = async ({ groupId, owner }) => {
  const answer = await owner.client.post(`/api/groups/${groupId}/sets`, {
    name: `Set ${randomUUID()}`,
    parameters: smallSet(),
  })
  expect(answer.status, answer.text).toBe(201)
  return { setId: answer.json.id }
}

const makeSession: ObjectMaker = async ({ owner }) => {
  const answer = await owner.client.get('/api/sessions')
  return { sessionId: answer.json.sessions.find((session: { current: boolean }) => session.current).id }
}

/** A run that waits for ever: it has no entry in the queue, so nothing happens to it while it is looked at. */
const makeRun: ObjectMaker = async (context) => {
  const { setId } = await makeSet(context)
  const [run] = await sql<{ id: string }>(
    `insert into runs (group_id, set_version_id, input_hash, engine_version, requested_by)
     select group_id, id, $3, '1', created_by from parameter_set_versions where group_id = $1 and set_id = $2
     returning id`,
    [context.groupId, setId, randomUUID()],
    context.groupId,
  )
  return { setId, runId: run?.id }
}

const makeCancelledRun: ObjectMaker = async (context) => {
  const { runId } = await makeRun(context)
  const answer = await context.owner.client.post(`/api/groups/${context.groupId}/runs/${runId}/cancel`)
  expect(answer.status, answer.text).toBe(200)
  return { runId, cancelledRunId: runId }
}

/** Computed by the server's own workers; equal sets of a group share the first one's result. */
const makeDoneRun: ObjectMaker = async (context) => {
  const { setId } = await makeSet(context)
  const runs = `/api/groups/${context.groupId}/runs`
  let answer = await context.owner.client.post(runs, { setId, version: 1 })
  expect(answer.status, answer.text).toBe(201)
  const runId: string = answer.json.id
  while (['queued', 'running'].includes(answer.json.state)) {
    await new Promise((resolve) => setTimeout(resolve, 100))
    answer = await context.owner.client.get(`${runs}/${runId}`)
  }
  expect(answer.json.state, answer.text).toBe('done')
  return { setId, runId, doneRunId: runId }
}

/** One maker a kind. A kind that a route's path names and that has no maker fails the matrix. */
export const makers: Partial<Record<ObjectKind, ObjectMaker>> = {
  setId: makeSet,
  fileId: makeFile,
  measurementId: makeMeasurement,
  sessionId: makeSession,
  runId: makeRun,
  cancelledRunId: makeCancelledRun,
  doneRunId: makeDoneRun,
}

export const randomIds = (groupId: string): ObjectIds => ({
  groupId,
  setId: randomUUID(),
  sessionId: randomUUID(),
  runId: randomUUID(),
  cancelledRunId: randomUUID(),
  doneRunId: randomUUID(),
  fileId: randomUUID(),
  measurementId: randomUUID(),
})
