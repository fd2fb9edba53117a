import { beforeAll, describe, expect, it } from 'vitest'
import { ParameterSetSchema } from '../../shared/schemas/parameter-set'
import { contentHash, hashOf } from '../../shared/utils/canonical'
import { sql } from './support/database'
import { smallSet } from './support/objects'
import { buildWorld, type World } from './support/people'

let world: World
let sets: string
beforeAll(async () => {
  world = await buildWorld()
  sets = `/api/groups/${world.groupId}/sets`
})

let count = 0
const create = async (name = `Set ${++count}`, parameters = smallSet()) => {
  const answer = await world.people.editor.client.post(sets, { name, parameters, note: 'first' })
  expect(answer.status, answer.text).toBe(201)
  return answer.json
}

describe('saving', () => {
  it('keeps the complete set under the hash of its content', async () => {
    const parameters = smallSet()
    const set = await create('Complete', parameters)
    const complete = ParameterSetSchema.parse(parameters)
    expect(set.version.parameters).toEqual(complete)
    expect(set.version.contentHash).toBe(contentHash(complete))
    expect(set.version).toMatchObject({ version: 1, note: 'first', createdBy: { name: 'Editor' } })
    expect(Object.keys(set).sort()).toEqual(['id', 'latestVersion', 'name', 'updatedAt', 'version'])
    expect(Object.keys(set.version).sort()).toEqual(
      ['contentHash', 'createdAt', 'createdBy', 'note', 'parameters', 'version'].sort(),
    )
  })

  it('again makes the next version and leaves the ones before as they were', async () => {
    const set = await create()
    const path = `${sets}/${set.id}`
    const change = { parameters: smallSet({ zeroPhononFwhmMeV: 0.7 }), note: 'wider', basedOn: 1 }
    const saved = await world.people.owner.client.post(`${path}/versions`, change)
    expect([saved.status, saved.json.latestVersion]).toEqual([201, 2])
    const { client } = world.people.viewer
    const first = await client.get(`${path}/versions/1`)
    expect(first.json.parameters).toEqual(set.version.parameters)
    const latest = await client.get(path)
    expect(latest.json.version).toMatchObject({ version: 2, note: 'wider', createdBy: { name: 'Owner' } })
    const { json } = await client.get(`${path}/versions`)
    expect(json.versions.map((item: { version: number }) => item.version)).toEqual([2, 1])
    expect(json.versions[0]).not.toHaveProperty('parameters')
  })

  it('on top of an older version is refused, and names the newer one', async () => {
    const set = await create()
    const path = `${sets}/${set.id}/versions`
    const body = (basedOn: number) => ({ parameters: smallSet(), basedOn })
    expect((await world.people.editor.client.post(path, body(1))).status).toBe(201)
    const answer = await world.people.owner.client.post(path, body(1))
    expect([answer.status, answer.json.code]).toEqual([409, 'object/version-conflict'])
    expect(answer.json.issues).toEqual([{ path: ['basedOn'], message: 'expected 2; found 1' }])
  })

  it('by fifty at once lets one of them through, and loses nobody silently', async () => {
    const set = await create()
    const path = `${sets}/${set.id}/versions`
    const answers = await Promise.all(
      Array.from({ length: 50 }, (_x, index) =>
        world.people.editor.client.post(path, {
          parameters: smallSet({ zeroPhononEnergyMeV: 1000 + index }),
          basedOn: 1,
        }),
      ),
    )
    expect(answers.filter(({ status }) => status === 201)).toHaveLength(1)
    expect(answers.filter(({ status }) => status === 409)).toHaveLength(49)
    const { json } = await world.people.viewer.client.get(path)
    expect(json.versions.map((item: { version: number }) => item.version)).toEqual([2, 1])
  })

  it('writes -0 as 0, so that equal sets have equal bytes', async () => {
    const set = await create('Signed zero', smallSet({ waitingTimesPs: [-0] }))
    expect(Object.is(set.version.parameters.waitingTimesPs[0], 0)).toBe(true)
    expect(set.version.contentHash).toBe((await create('Plain zero')).version.contentHash)
  })

  it.each([5e-324, 0.1 + 0.2, 1 / 3, 123456.789e-7, 2 ** 40])('returns the bits of %d', async (value) => {
    const set = await create(undefined, smallSet({ bath: [{ ...powerLaw, couplingStrength: Math.min(value, 1000) }] }))
    expect(set.version.parameters.bath[0].couplingStrength).toBe(Math.min(value, 1000))
  })
})

const powerLaw = {
  kind: 'powerLaw',
  couplingStrength: 0.1,
  exponent: 3,
  cutoffEnergyMeV: 3,
  cutoffShape: 'gaussian',
} as const

describe('names', () => {
  it('are unique within a group, for creating and renaming, and free in another', async () => {
    await create('Taken')
    const other = await create()
    const body = { name: 'Taken', parameters: smallSet() }
    for (const answer of [
      await world.people.editor.client.post(sets, body),
      await world.people.editor.client.patch(`${sets}/${other.id}`, { name: 'Taken' }),
    ]) {
      expect([answer.status, answer.json.code, answer.json.issues[0].path]).toEqual([
        409,
        'object/name-taken',
        ['name'],
      ])
    }
    const elsewhere = await world.people.outsider.client.post(`/api/groups/${world.otherGroupId}/sets`, body)
    expect(elsewhere.status).toBe(201)
  })

  it('go to one of many who ask at once', async () => {
    const body = { name: 'Wanted by all', parameters: smallSet() }
    const answers = await Promise.all(Array.from({ length: 20 }, () => world.people.editor.client.post(sets, body)))
    expect(answers.map(({ status }) => status).sort()).toEqual([201, ...Array<number>(19).fill(409)])
  })

  it('can be changed', async () => {
    const set = await create()
    const answer = await world.people.editor.client.patch(`${sets}/${set.id}`, { name: '  Renamed  ' })
    expect([answer.status, answer.json.name, answer.json.latestVersion]).toEqual([200, 'Renamed', 1])
  })
})

describe('the file of a version', () => {
  it('has the same bytes every time, and the same hash when it comes back', async () => {
    const set = await create('Sample “Ω” α-7')
    const path = `${sets}/${set.id}/versions/1/file`
    const first = await world.people.viewer.client.get(path)
    const second = await world.people.viewer.client.get(path)
    expect(hashOf(first.bytes)).toBe(hashOf(second.bytes))
    expect(first.headers.get('content-disposition')).toMatch(/^attachment; filename=".*"; filename\*=UTF-8''/)
    expect(first.headers.get('content-type')).toBe('application/json')
    const parameters = JSON.parse(first.text)
    const again = await create(undefined, parameters)
    expect(again.version.contentHash).toBe(set.version.contentHash)
    const third = await world.people.viewer.client.get(`${sets}/${again.id}/versions/1/file`)
    expect(third.bytes.equals(first.bytes)).toBe(true)
  })

  it.each(['0', '2', '01', '1.0', '-1', '1e0', '999999999999', 'latest', '1%00'])(
    'does not exist for version %s',
    async (version) => {
      const set = await create()
      const answer = await world.people.viewer.client.get(`${sets}/${set.id}/versions/${version}/file`)
      expect([answer.status, answer.json.code]).toEqual([404, 'request/not-found'])
    },
  )
})

describe('what a body may carry', () => {
  const foreign = {
    id: '00000000-0000-4000-8000-000000000000',
    groupId: '00000000-0000-4000-8000-000000000000',
    createdBy: '00000000-0000-4000-8000-000000000000',
    createdAt: '2020-01-01T00:00:00Z',
    latestVersion: 7,
    contentHash: 'x',
    version: 3,
  }

  it('is what its schema names, and no column beside it', async () => {
    const set = await create()
    const { client } = world.people.editor
    for (const [key, value] of Object.entries(foreign)) {
      const extra = { [key]: value }
      const answers = [
        await client.post(sets, { name: `Extra ${key}`, parameters: smallSet(), ...extra }),
        await client.patch(`${sets}/${set.id}`, { name: 'Extra', ...extra }),
        await client.post(`${sets}/${set.id}/versions`, { parameters: smallSet(), basedOn: 1, ...extra }),
        await client.post(sets, { name: `Extra ${key}`, parameters: { ...smallSet(), ...extra } }),
      ]
      for (const answer of answers) {
        expect([key, answer.status, answer.json.code]).toEqual([key, 422, 'input/invalid'])
        expect(answer.text).toContain(key)
      }
    }
    const [row] = await sql<{ latest_version: number; versions: number }>(
      `select latest_version, (select count(*)::int from parameter_set_versions v where v.set_id = s.id) as versions
       from parameter_sets s where s.id = $1`,
      [set.id],
      world.groupId,
    )
    expect(row).toEqual({ latest_version: 1, versions: 1 })
  })
})

describe('removing', () => {
  it('takes the versions along', async () => {
    const set = await create()
    expect((await world.people.editor.client.remove(`${sets}/${set.id}`)).status).toBe(204)
    expect((await world.people.editor.client.get(`${sets}/${set.id}`)).status).toBe(404)
    const rows = await sql('select 1 from parameter_set_versions where set_id = $1', [set.id], world.groupId)
    expect(rows).toEqual([])
  })

  it('is refused while a run rests on a version', async () => {
    const set = await create()
    await sql(
      `insert into runs (group_id, set_version_id, input_hash, engine_version, requested_by, state)
       select $2::uuid, v.id, 'x', '1', $3::uuid, 'cancelled' from parameter_set_versions v where v.set_id = $1`,
      [set.id, world.groupId, world.people.editor.id],
      world.groupId,
    )
    const answer = await world.people.editor.client.remove(`${sets}/${set.id}`)
    expect([answer.status, answer.json.code]).toEqual([409, 'object/in-use'])
    expect((await world.people.editor.client.get(`${sets}/${set.id}`)).status).toBe(200)
  })
})
