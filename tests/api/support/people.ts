import { randomBytes } from 'node:crypto'
import { expect } from 'vitest'
import { Client } from './client'
import { sql } from './database'

export const goodPassword = 'violet umbrella over seven tides'

export interface Person {
  client: Client
  id: string
  email: string
  name: string
}

const nextEmail = (name: string) => `${name}.${randomBytes(6).toString('hex')}@institute.example`

/** Registers through the API; the client is signed in afterwards. */
export const register = async (name: string, client = new Client()): Promise<Person> => {
  const email = nextEmail(name.toLowerCase().replaceAll(/[^a-z]/g, '-'))
  const answer = await client.post('/api/accounts', { email, name, password: goodPassword })
  expect(answer.status, answer.text).toBe(201)
  return { client, id: answer.json.user.id, email, name }
}

export const createGroup = async (owner: Person, name: string): Promise<string> => {
  const answer = await owner.client.post('/api/groups', { name })
  expect(answer.status, answer.text).toBe(201)
  return answer.json.id
}

/** Invitations come later; until then memberships are written where the server reads them. */
export const addMember = async (
  groupId: string,
  person: Person,
  role: 'viewer' | 'editor' | 'owner',
): Promise<void> => {
  await sql('insert into memberships (group_id, user_id, role) values ($1, $2, $3)', [groupId, person.id, role])
}

export const removeMember = async (groupId: string, person: Person): Promise<void> => {
  await sql('delete from memberships where group_id = $1 and user_id = $2', [groupId, person.id])
}

export const callers = ['signedOut', 'viewer', 'editor', 'owner', 'exMember', 'outsider'] as const
export type Caller = (typeof callers)[number]

export interface World {
  /** The group under test, and the outsider's own. */
  groupId: string
  otherGroupId: string
  people: Record<Exclude<Caller, 'signedOut'>, Person>
  clientOf: (caller: Caller) => Client
}

/** A group with one person of every kind, and a second group whose owner is a stranger to the first. */
export const buildWorld = async (): Promise<World> => {
  const [viewer, editor, owner, exMember, outsider] = await Promise.all(
    ['Viewer', 'Editor', 'Owner', 'Former Member', 'Outsider'].map((name) => register(name)),
  )
  if (!viewer || !editor || !owner || !exMember || !outsider) throw new Error('expected five people')
  const groupId = await createGroup(owner, 'Layered crystals')
  const otherGroupId = await createGroup(outsider, 'Colloidal dots')
  await addMember(groupId, viewer, 'viewer')
  await addMember(groupId, editor, 'editor')
  await addMember(groupId, exMember, 'editor')
  await removeMember(groupId, exMember)
  const people = { viewer, editor, owner, exMember, outsider }
  const clientOf = (caller: Caller) => (caller === 'signedOut' ? new Client() : people[caller].client)
  return { groupId, otherGroupId, people, clientOf }
}
