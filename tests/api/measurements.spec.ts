import { randomUUID } from 'node:crypto'
import { beforeAll, describe, expect, it } from 'vitest'
import { sql } from './support/database'
import { measurementBody, smallReading, smallTable, upload } from './support/files'
import { buildWorld, type World } from './support/people'
import { storedFiles } from './support/store'

let world: World
let groupId: string
beforeAll(async () => {
  world = await buildWorld()
  groupId = world.groupId
})

const owner = () => world.people.owner.client
const path = () => `/api/groups/${groupId}/measurements`
const uploaded = async (content = smallTable): Promise<string> => {
  const answer = await upload(owner(), groupId, content)
  expect(answer.status, answer.text).toBe(201)
  return answer.json.id
}

const itemKeys = [
  ...['createdAt', 'createdBy', 'file', 'hasUncertainties', 'id', 'isInvented', 'kind', 'name', 'note', 'pointCount'],
  ...['range', 'reading', 'sampleName', 'temperatureK'],
]

describe('a confirmed measurement', () => {
  it('keeps its numbers to the last bit and says where they come from', async () => {
    const cells = [0.1, 1 / 3, 5e-324, 1.5e300, -2.5e-17, 123456.789012345]
    const table = `Energy (meV);OD;sigma\n${cells.map((cell, index) => `${1850 + index / 7};${cell};${(index + 1) / 9}`).join('\n')}\n`
    const fileId = await uploaded(table)
    const body = {
      ...measurementBody(fileId),
      note: 'second cool-down',
      reading: { ...smallReading, uncertaintyColumn: 2 },
    }
    const made = await owner().post(path(), body)
    expect(made.status, made.text).toBe(201)
    const got = await owner().get(`${path()}/${made.json.id}`)
    expect(got.json).toEqual(made.json)
    expect(Object.keys(got.json).sort()).toEqual([...itemKeys, 'energiesMeV', 'uncertainties', 'values'].sort())
    expect(got.json.values).toEqual(cells)
    expect(got.json.energiesMeV).toEqual(cells.map((_, index) => 1850 + index / 7))
    expect(got.json.uncertainties).toEqual(cells.map((_, index) => (index + 1) / 9))
    expect(got.json).toMatchObject({
      name: body.name,
      kind: 'absorption',
      sampleName: 'Sample T1 (invented)',
      temperatureK: 4,
      note: 'second cool-down',
      isInvented: false,
      pointCount: 6,
      hasUncertainties: true,
      range: { energyMinMeV: 1850, energyMaxMeV: 1850 + 5 / 7 },
      createdBy: { id: world.people.owner.id, name: 'Owner' },
    })
    expect(got.json.file).toMatchObject({ id: fileId, name: 'spectrum.csv' })
    // Little-endian doubles, also for whoever reads the table itself.
    const [row] = await sql<{ bytes: Buffer }>(
      'select values as bytes from measurements where id = $1',
      [made.json.id],
      groupId,
    )
    expect(cells.map((_, index) => row?.bytes.readDoubleLE(8 * index))).toEqual(cells)
  })

  it('is listed without its arrays, newest first', async () => {
    const names: string[] = []
    for (let index = 0; index < 3; index += 1) {
      const body = measurementBody(await uploaded())
      names.unshift(body.name)
      expect((await owner().post(path(), body)).status).toBe(201)
    }
    const list = await world.people.viewer.client.get(path())
    expect(list.json.measurements.slice(0, 3).map(({ name }: { name: string }) => name)).toEqual(names)
    expect(Object.keys(list.json.measurements[0]).sort()).toEqual(itemKeys)
    expect(list.json.measurements[0].hasUncertainties).toBe(false)
  })

  it('has a name of its own in the group', async () => {
    const body = measurementBody(await uploaded())
    expect((await owner().post(path(), body)).status).toBe(201)
    const again = await owner().post(path(), { ...body, name: `  ${body.name} ` })
    expect(again.status).toBe(409)
    expect(again.json.code).toBe('object/name-taken')
    expect(again.json.issues).toEqual([{ path: ['name'], message: expect.stringMatching(/no other measurement/) }])
    const together = await Promise.all(
      Array.from({ length: 5 }, () => owner().post(path(), { ...body, name: 'At the same moment' })),
    )
    expect(together.map(({ status }) => status).sort()).toEqual([201, 409, 409, 409, 409])
  })

  it('shares its file with others, and takes it along as the last one', async () => {
    const count = storedFiles().length
    const fileId = await uploaded()
    const one = await owner().post(path(), measurementBody(fileId))
    const two = await owner().post(path(), measurementBody(fileId))
    expect(storedFiles()).toHaveLength(count + 1)
    expect((await owner().remove(`${path()}/${one.json.id}`)).status).toBe(204)
    expect((await owner().get(`/api/groups/${groupId}/files/${fileId}/content`)).status).toBe(200)
    expect((await owner().remove(`${path()}/${two.json.id}`)).status).toBe(204)
    expect((await owner().get(`/api/groups/${groupId}/files/${fileId}/content`)).status).toBe(404)
    expect(storedFiles()).toHaveLength(count)
    expect((await owner().remove(`${path()}/${two.json.id}`)).status).toBe(404)
  })
})

describe('a measurement that cannot be made', () => {
  const refuse = async (changes: object, reading: object = {}) => {
    const body = measurementBody(await uploaded())
    return owner().post(path(), { ...body, ...changes, reading: { ...body.reading, ...reading } })
  }

  it.each([
    ['an empty name', { name: '   ' }, ['name']],
    ['a name of 201 characters', { name: 'x'.repeat(201) }, ['name']],
    ['another kind', { kind: 'raman' }, ['kind']],
    ['a temperature below 0 K', { temperatureK: -1 }, ['temperatureK']],
    ['a temperature as text', { temperatureK: '4' }, ['temperatureK']],
    ['a file id that is none', { fileId: '../x' }, ['fileId']],
    ['a mark that only the server sets', { isInvented: true }, ['isInvented']],
    ['a group of its own', { groupId: randomUUID() }, ['groupId']],
  ])('with %s is refused with its place', async (_what, changes, place) => {
    const answer = await refuse(changes)
    expect(answer.status, answer.text).toBe(422)
    expect(answer.json.code).toBe('input/invalid')
    expect(answer.json.issues[0].path).toEqual(place)
  })

  it.each([
    ['the same column twice', { valueColumn: 0 }, ['reading', 'valueColumn']],
    ['one mark for two things', { groupMark: 'point' }, ['reading', 'groupMark']],
    ['the wavelength factor without a wavelength', { applyJacobian: true }, ['reading', 'applyJacobian']],
    ['a column beyond any table', { axisColumn: 1000 }, ['reading', 'axisColumn']],
  ])('with %s is refused with its place', async (_what, reading, place) => {
    const answer = await refuse({}, reading)
    expect(answer.status, answer.text).toBe(422)
    expect(answer.json.issues[0].path).toEqual(place)
  })

  it.each([
    ['the wrong delimiter', { delimiter: 'tab' }, /line 2: found 1 column; expected at least 2/],
    ['the wrong decimal mark', { decimalMark: 'comma' }, /line 2, column 2: found "0\.1"|decimal comma/],
    ['too few header lines', { headerLines: 0 }, /line 1, column 1: found "Energy \(meV\)"/],
    ['a column that is not there', { valueColumn: 5 }, /line 2: found 2 columns; expected at least 6/],
  ])('under %s is refused with line and column', async (_what, reading, says) => {
    const answer = await refuse({}, reading)
    expect(answer.status, answer.text).toBe(422)
    expect(answer.json.code).toBe('measurement/unreadable')
    expect(answer.json.detail).toMatch(says)
  })

  it('of a file of another group is not found', async () => {
    const foreign = await upload(world.people.outsider.client, world.otherGroupId, smallTable)
    const answer = await owner().post(path(), measurementBody(foreign.json.id))
    expect(answer.status).toBe(404)
    expect(answer.json.issues[0].path).toEqual(['fileId'])
  })

  it('leaves the file for another try', async () => {
    const fileId = await uploaded()
    const wrong = { ...measurementBody(fileId), reading: { ...smallReading, valueColumn: 5 } }
    expect((await owner().post(path(), wrong)).status).toBe(422)
    expect((await owner().post(path(), measurementBody(fileId))).status).toBe(201)
  })
})
