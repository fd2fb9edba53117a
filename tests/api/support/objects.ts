import { randomUUID } from 'node:crypto'
import { expect } from 'vitest'
import type { ParameterSetInput } from '../../../shared/schemas/parameter-set'
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

/** One maker a kind. A kind that a route's path names and that has no maker fails the matrix. */
export const makers: Partial<Record<ObjectKind, ObjectMaker>> = {
  setId: makeSet,
  sessionId: makeSession,
}

export const randomIds = (groupId: string): ObjectIds => ({
  groupId,
  setId: randomUUID(),
  sessionId: randomUUID(),
  runId: randomUUID(),
  fileId: randomUUID(),
  measurementId: randomUUID(),
})
