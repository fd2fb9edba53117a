import { setTimeout as pause } from 'node:timers/promises'
import { afterEach, beforeAll, describe, expect, it } from 'vitest'
import { limits } from '../../../shared/utils/limits'
import { smallSet } from '../support/objects'
import { addMember, createGroup, register, removeMember, type Person } from '../support/people'
import { openEvents, type OpenStream } from './event-source'
import { until } from './workbench'

let owner: Person
let groupId: string
const streams: OpenStream[] = []
let count = 0

/** Enough maps for a few reports of progress. */
const several = { temperaturesK: [4, 30], waitingTimesPs: [0, 1, 10] }

beforeAll(async () => {
  owner = await register('Stream Owner')
  groupId = await createGroup(owner, 'Streams')
})

afterEach(async () => {
  for (const stream of streams.splice(0)) stream.close()
  // The server counts a stream until it hears that its client has gone.
  await pause(200)
})

const open = async (person: Person, group = groupId, lastEventId?: string) => {
  const stream = await openEvents(person.client, group, lastEventId)
  streams.push(stream)
  return stream
}

/** A set that no other test has computed. */
const newSet = async (person: Person, group: string, change = {}) => {
  const parameters = smallSet({ zeroPhononEnergyMeV: 1500 + ++count, modes: [], ...change })
  const answer = await person.client.post(`/api/groups/${group}/sets`, { name: `Set ${count}`, parameters })
  expect(answer.status, answer.text).toBe(201)
  return answer.json.id as string
}
const run = async (person: Person, group = groupId, change = {}) => {
  const setId = await newSet(person, group, change)
  const answer = await person.client.post(`/api/groups/${group}/runs`, { setId, version: 1 })
  expect(answer.status, answer.text).toBe(201)
  return answer.json.id as string
}
const statesOf = (stream: OpenStream, runId: string) =>
  stream.messages.filter(({ id }) => id === runId).map(({ state }) => state)
const seen = (stream: OpenStream, runId: string, state: string) =>
  until(
    () => statesOf(stream, runId),
    (states) => states.includes(state),
    60_000,
  )
const closed = (stream: OpenStream, limitMs: number) =>
  until(
    () => stream.isClosed(),
    (over) => over,
    limitMs,
  )

describe('the events of a group', () => {
  it('follow a run from the queue to its end, with progress that never falls', async () => {
    const stream = await open(owner)
    const runId = await run(owner, groupId, several)
    await seen(stream, runId, 'done')
    const own = stream.messages.filter(({ id }) => id === runId)
    expect(own[0]?.state).toBe('queued')
    expect(own.map(({ state }) => state)).toContain('running')
    expect(own.at(-1)).toMatchObject({ state: 'done', progress: 1, secondsLeft: null })
    const progress = own.map((message) => message.progress)
    expect([...progress].sort((a, b) => a - b)).toEqual(progress)
    expect(Object.keys(own[0] ?? {}).sort()).toEqual(['at', 'id', 'progress', 'secondsLeft', 'state'])
  })

  it('begin with the runs that go on, for a page that comes in the middle', async () => {
    const runId = await run(owner, groupId, several)
    const stream = await open(owner)
    await until(
      () => statesOf(stream, runId).length,
      (heard) => heard > 0,
    )
    expect(['queued', 'running', 'done']).toContain(statesOf(stream, runId)[0])
    await seen(stream, runId, 'done')
  })

  it('lose nothing to a break of the line: the page says what it heard last', async () => {
    const stream = await open(owner)
    const first = await run(owner)
    await seen(stream, first, 'done')
    const last = stream.messages.at(-1)?.at
    stream.close()
    const meanwhile = await run(owner)
    await until(
      async () => (await owner.client.get(`/api/groups/${groupId}/runs/${meanwhile}`)).json.state,
      (state) => state === 'done',
      60_000,
    )
    // Without saying so, a finished run is not news.
    const fresh = await open(owner)
    await pause(300)
    expect(statesOf(fresh, meanwhile)).toEqual([])
    const resumed = await open(owner, groupId, String(last))
    await seen(resumed, meanwhile, 'done')
    // A nonsense id is a fresh start, not an error.
    const confused = await open(owner, groupId, '1 or 1=1')
    expect(confused.status).toBe(200)
  })

  it('stay in the group', async () => {
    const stranger = await register('Stranger')
    const otherGroup = await createGroup(stranger, 'Elsewhere')
    const [mine, theirs] = [await open(owner), await open(stranger, otherGroup)]
    const runId = await run(owner)
    await seen(mine, runId, 'done')
    await pause(200)
    expect(theirs.body()).not.toContain(runId)
    expect(theirs.messages).toEqual([])
    expect((await open(stranger)).status).toBe(404)
  })
})

describe('an open stream', () => {
  it('is closed within five seconds when its reader leaves the group', async () => {
    const guest = await register('Guest')
    await addMember(groupId, guest, 'viewer')
    const [kept, lost] = [await open(owner), await open(guest)]
    await removeMember(groupId, guest)
    await closed(lost, 5000)
    expect(kept.isClosed()).toBe(false)
    const runId = await run(owner)
    await seen(kept, runId, 'done')
    expect(lost.body()).not.toContain(runId)
  })

  it('is closed within five seconds when its reader signs out', async () => {
    const guest = await register('Guest')
    await addMember(groupId, guest, 'viewer')
    const copied = guest.client.copy()
    const lost = await openEvents(copied, groupId)
    streams.push(lost)
    expect((await guest.client.remove('/api/session')).status).toBe(204)
    await closed(lost, 5000)
    expect((await openEvents(copied, groupId)).status).toBe(401)
  })

  it('is one of a few that a person may have', async () => {
    const guest = await register('Guest')
    await addMember(groupId, guest, 'viewer')
    for (let index = 0; index < limits.eventStreamsPerUser; index++) expect((await open(guest)).status).toBe(200)
    const refused = await open(guest)
    expect(refused.status).toBe(409)
    await until(
      () => refused.body(),
      (body) => body.includes('quota/exceeded'),
    )
    expect((await open(owner)).status).toBe(200)
    streams.at(0)?.close()
    await until(
      async () => (await open(guest)).status,
      (status) => status === 200,
    )
  })
})
