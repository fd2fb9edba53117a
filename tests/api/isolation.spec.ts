import { randomUUID } from 'node:crypto'
import { beforeAll, describe, expect, it } from 'vitest'
import { policy } from './policy'
import { listGroupTables, sql } from './support/database'
import { makers, randomIds, smallSet, type ObjectIds } from './support/objects'
import { addMember, createGroup, register, type Person } from './support/people'
import { listRouteFiles, pathOf, toRoute } from './support/routes'

let ann: Person
let ben: Person
let annsGroup: string
let bensGroup: string
let bensIds: ObjectIds
const canary = () => `canary-${randomUUID()}`
const canaries: string[] = []
const plant = (): string => {
  const word = canary()
  canaries.push(word)
  return word
}

beforeAll(async () => {
  ann = await register('Ann')
  ben = await register(plant())
  annsGroup = await createGroup(ann, 'Group of Ann')
  bensGroup = await createGroup(ben, plant())
  bensIds = randomIds(bensGroup)
  for (const make of Object.values(makers)) {
    Object.assign(bensIds, await make({ groupId: bensGroup, owner: ben }))
    await make({ groupId: annsGroup, owner: ann })
  }
  for (let index = 0; index < 10; index++) {
    const modes = [{ label: plant(), energyMeV: 20, huangRhys: 0.1 }]
    const body = { name: plant(), note: plant(), parameters: smallSet({ modes }) }
    const answer = await ben.client.post(`/api/groups/${bensGroup}/sets`, body)
    expect(answer.status).toBe(201)
    canaries.push(answer.json.id)
  }
  // Whatever else the group's tables hold in words.
  for (const table of ['runs', 'measurements', 'files']) {
    const rows = await sql<{ id: string }>(`select id from ${table}`, [], bensGroup)
    canaries.push(...rows.map(({ id }) => id))
  }
  canaries.push(bensGroup, ben.id, ben.email)
})

describe('nothing of another group', () => {
  it('shows in any answer, header or error', async () => {
    const seen: string[] = []
    let answers = 0
    for (const route of listRouteFiles().map(toRoute)) {
      const entry = policy[route.file]
      if (!entry || route.method !== 'GET' || entry.stream) continue
      const own = randomIds(annsGroup)
      for (const ids of [own, { ...bensIds, groupId: annsGroup }]) {
        const answer = await ann.client.get(pathOf(route, entry, ids))
        answers++
        const text = `${answer.text}\n${JSON.stringify([...answer.headers])}`
        seen.push(...canaries.filter((word) => text.includes(word)).map((word) => `${route.pattern}: ${word}`))
      }
    }
    expect(answers).toBeGreaterThan(10)
    expect(seen).toEqual([])
  })

  it('hides behind counts and taken names', async () => {
    const group = await ann.client.get(`/api/groups/${annsGroup}`)
    expect(group.json.counts.sets).toBeLessThan(10)
    const [name] = (await ben.client.get(`/api/groups/${bensGroup}/sets`)).json.sets.map(
      (set: { name: string }) => set.name,
    )
    const answer = await ann.client.post(`/api/groups/${annsGroup}/sets`, { name, parameters: smallSet() })
    expect(answer.status).toBe(201)
  })
})

describe('a member who loses the group', () => {
  it('loses it with the next request, and gets it back with the role', async () => {
    const member = await register('Changing Member')
    const path = `/api/groups/${annsGroup}/sets`
    const body = () => ({ name: `By a member ${randomUUID()}`, parameters: smallSet() })
    const status = async () => (await member.client.post(path, body())).status
    expect(await status()).toBe(404)
    await addMember(annsGroup, member, 'editor')
    expect(await status()).toBe(201)
    await sql(`update memberships set role = 'viewer' where user_id = $1`, [member.id])
    expect(await status()).toBe(403)
    await sql('delete from memberships where user_id = $1', [member.id])
    expect(await status()).toBe(404)
  })
})

describe('the fence in the database', () => {
  it('stands around every table that names a group, for its owner too', async () => {
    const fenced = await listGroupTables()
    const rows = await sql<{ name: string; forced: boolean }>(
      `select c.relname as name, c.relrowsecurity and c.relforcerowsecurity as forced
       from pg_class c join pg_attribute a on a.attrelid = c.oid and a.attname = 'group_id'
       where c.relnamespace = 'public'::regnamespace and c.relkind = 'r' order by 1`,
    )
    // Memberships decide who belongs to a group; the queue's books hold ids only and are read across groups.
    const outside = ['memberships', 'run_attempts', 'queue_turns']
    const missing = rows.filter(({ name, forced }) => !forced && !outside.includes(name))
    expect(missing).toEqual([])
    expect(fenced.length).toBeGreaterThanOrEqual(7)
  })

  it('shows no row to the application role outside a group', async () => {
    const [role] = await sql<{ super: boolean; bypass: boolean }>(
      'select rolsuper as super, rolbypassrls as bypass from pg_roles where rolname = current_user',
    )
    expect(role).toEqual({ super: false, bypass: false })
    for (const table of await listGroupTables()) {
      const [without] = await sql<{ count: number }>(`select count(*)::int as count from ${table}`)
      expect([table, without?.count]).toEqual([table, 0])
    }
    const inside = await sql('select 1 from parameter_sets', [], bensGroup)
    expect(inside.length).toBeGreaterThan(9)
  })

  it('lets nobody write into another group, or carry a row there', async () => {
    const insert = `insert into parameter_sets (group_id, name, created_by) values ($1, 'smuggled', $2)`
    await expect(sql(insert, [bensGroup, ann.id], annsGroup)).rejects.toThrow(/row-level security/)
    await expect(sql(insert, [bensGroup, ann.id])).rejects.toThrow(/row-level security/)
    const move = 'update parameter_sets set group_id = $1'
    await expect(sql(move, [bensGroup], annsGroup)).rejects.toThrow(/row-level security/)
    expect(await sql('delete from parameter_sets where group_id = $1 returning id', [bensGroup], annsGroup)).toEqual([])
  })

  it('cannot be taken down by the application role', async () => {
    await expect(sql('alter table parameter_sets disable row level security')).rejects.toThrow(/must be owner/)
    await expect(sql('drop policy parameter_sets_of_group on parameter_sets')).rejects.toThrow(/must be owner/)
    await expect(sql('set role linewright_owner')).rejects.toThrow(/permission denied/)
    await expect(sql('create table sneaked (id int)')).rejects.toThrow(/permission denied/)
  })
})
