import { createHash, randomUUID } from 'node:crypto'
import { beforeAll, describe, expect, it } from 'vitest'
import { malformed } from '../measurement/malformed'
import { boundary, form, formEnd, measurementBody, multipartType, part, smallTable, upload } from './support/files'
import { buildWorld, type World } from './support/people'
import { leavingNothing, storedFiles } from './support/store'

let world: World
let groupId: string
beforeAll(async () => {
  world = await buildWorld()
  groupId = world.groupId
})

const owner = () => world.people.owner.client
const filesPath = () => `/api/groups/${groupId}/files`

const sendForm = (body: Buffer, contentType = multipartType, client = owner()) =>
  client.send(filesPath(), { method: 'POST', contentType, body })

describe('an uploaded table', () => {
  it('is understood, kept untouched and given back byte for byte', async () => {
    const answer = await upload(owner(), groupId, smallTable, 'Sample T1 4 K.csv')
    expect(answer.status, answer.text).toBe(201)
    const { id, name, byteLength, sha256, proposal } = answer.json
    expect(Object.keys(answer.json).sort()).toEqual(['byteLength', 'id', 'name', 'proposal', 'sha256'])
    expect(name).toBe('Sample T1 4 K.csv')
    expect(byteLength).toBe(Buffer.byteLength(smallTable))
    expect(sha256).toBe(createHash('sha256').update(smallTable).digest('hex'))
    expect(proposal.reading).toMatchObject({ delimiter: 'semicolon', axisUnit: 'meV', headerLines: 1 })
    expect(proposal.needsAnswer).toEqual([])
    expect(proposal.rows).toBe(40)
    expect(proposal.range).toEqual({ axisMin: 1840, axisMax: 1879, energyMinMeV: 1840, energyMaxMeV: 1879 })

    const content = await owner().get(`${filesPath()}/${id}/content`)
    expect(content.status).toBe(200)
    expect(content.bytes.equals(Buffer.from(smallTable))).toBe(true)
  })

  it('is read again under a corrected reading', async () => {
    const { json } = await upload(owner(), groupId, '1;2;3\n2;3;4\n3;4;5\n4;5;6\n')
    expect(json.proposal.needsAnswer.map(({ field }: { field: string }) => field)).toContain('axisUnit')
    const reading = { ...json.proposal.reading, axisUnit: 'eV', axisColumn: 0, valueColumn: 2 }
    const again = await owner().post(`${filesPath()}/${json.id}/reading`, { reading, answered: ['axisUnit'] })
    expect(again.status, again.text).toBe(200)
    expect(again.json.proposal.preview).toEqual({ energiesMeV: [1000, 2000, 3000, 4000], values: [3, 4, 5, 6] })
    expect(again.json.proposal.needsAnswer.map(({ field }: { field: string }) => field)).not.toContain('axisUnit')
    const wrong = await owner().post(`${filesPath()}/${json.id}/reading`, { reading: { ...reading, valueColumn: 7 } })
    expect(wrong.status).toBe(422)
    expect(wrong.json.code).toBe('measurement/unreadable')
    expect(wrong.json.detail).toMatch(/line 1: found 3 columns; expected at least 8/)
  })

  it('of some size is read in a thread, with the same result', async () => {
    const lines = Array.from({ length: 60_000 }, (_, index) => `${(1500 + index / 100).toFixed(2)}\t${index % 97}.5`)
    const answer = await upload(owner(), groupId, `Energy (meV)\tcounts\n${lines.join('\n')}\n`)
    expect(answer.status, answer.text.slice(0, 300)).toBe(201)
    expect(answer.json.proposal.rows).toBe(60_000)
    expect(answer.json.proposal.preview.values.length).toBeLessThanOrEqual(2000)
  })

  it('is only ever offered as a download, whatever it holds', async () => {
    const active = '<script>alert(1)</script>;x\n'
    const answer = await upload(owner(), groupId, `# ${active}${smallTable}`, 'über %22q%22 <b>.svg')
    expect(answer.status, answer.text).toBe(201)
    expect(answer.json.name).toBe('über %22q%22 _b_.svg')
    const content = await owner().get(`${filesPath()}/${answer.json.id}/content`)
    expect(content.headers.get('content-type')).toBe('application/octet-stream')
    expect(content.headers.get('content-disposition')).toMatch(
      /^attachment; filename=".*"; filename\*=UTF-8''%C3%BCber/,
    )
    expect(content.headers.get('content-security-policy')).toMatch(/sandbox/)
    expect(content.headers.get('x-content-type-options')).toBe('nosniff')
    expect(content.headers.get('cache-control')).toMatch(/no-store/)
  })

  it('goes when it is removed, and stays while a measurement rests on it', async () => {
    const { json } = await upload(owner(), groupId, smallTable)
    const made = await owner().post(`/api/groups/${groupId}/measurements`, measurementBody(json.id))
    expect(made.status, made.text).toBe(201)
    const refused = await owner().remove(`${filesPath()}/${json.id}`)
    expect(refused.status).toBe(409)
    expect(refused.json.code).toBe('object/in-use')
    await owner().remove(`/api/groups/${groupId}/measurements/${made.json.id}`)
    expect((await owner().get(`${filesPath()}/${json.id}/content`)).status).toBe(404)
    const second = await upload(owner(), groupId, smallTable)
    const count = storedFiles().length
    expect((await owner().remove(`${filesPath()}/${second.json.id}`)).status).toBe(204)
    expect(storedFiles()).toHaveLength(count - 1)
  })
})

describe('what is no table', () => {
  it.each(malformed)('$name is refused with a sentence and leaves nothing', async ({ name, make, says }) => {
    const answer = await leavingNothing(groupId, () => upload(owner(), groupId, Buffer.from(make()), name))
    expect(answer.status, answer.text.slice(0, 300)).toBe(422)
    expect(answer.headers.get('content-type')).toBe('application/problem+json')
    expect(answer.json.code).toBe('measurement/unreadable')
    expect(answer.json.detail).toMatch(says)
  })
})

describe('multipart forms that are not one file', () => {
  const cases: { what: string; body: () => Buffer; contentType?: string; status: number; code: string }[] = [
    {
      what: 'two files',
      body: () => Buffer.concat([part(smallTable), part(smallTable), formEnd]),
      status: 422,
      code: 'input/invalid',
    },
    {
      what: 'a file and a field',
      body: () => Buffer.concat([part(smallTable), part('x', 'name="note"'), formEnd]),
      status: 422,
      code: 'input/invalid',
    },
    {
      what: 'a field before the file',
      body: () => Buffer.concat([part('x', 'name="note"'), part(smallTable), formEnd]),
      status: 422,
      code: 'input/invalid',
    },
    { what: 'no part', body: () => formEnd, status: 422, code: 'input/invalid' },
    {
      what: 'ten thousand parts',
      body: () => Buffer.concat([...Array.from({ length: 10_000 }, () => part('1;2')), formEnd]),
      status: 422,
      code: 'input/invalid',
    },
    { what: 'a missing end', body: () => part(smallTable), status: 400, code: 'input/malformed' },
    {
      what: 'an end in the middle of the file',
      body: () => part(smallTable).subarray(0, 300),
      status: 400,
      code: 'input/malformed',
    },
    { what: 'no body', body: () => Buffer.alloc(0), status: 400, code: 'input/malformed' },
    {
      what: 'no boundary',
      body: () => form(smallTable),
      contentType: 'multipart/form-data',
      status: 400,
      code: 'input/malformed',
    },
    {
      what: 'another boundary',
      body: () => form(smallTable),
      contentType: 'multipart/form-data; boundary=other',
      status: 400,
      code: 'input/malformed',
    },
    {
      what: 'a part header of a megabyte',
      body: () => Buffer.concat([part(smallTable, `name="file"; filename="${'x'.repeat(2 ** 20)}"`), formEnd]),
      status: 400,
      code: 'input/malformed',
    },
    {
      what: 'JSON',
      body: () => Buffer.from('{}'),
      contentType: 'application/json',
      status: 415,
      code: 'input/media-type',
    },
    {
      what: 'bare bytes',
      body: () => Buffer.from(smallTable),
      contentType: 'application/octet-stream',
      status: 415,
      code: 'input/media-type',
    },
    {
      what: 'text',
      body: () => Buffer.from(smallTable),
      contentType: 'text/csv',
      status: 415,
      code: 'input/media-type',
    },
  ]

  it.each(cases)('$what is refused', async ({ body, contentType, status, code }) => {
    const answer = await leavingNothing(groupId, () => sendForm(body(), contentType))
    expect(answer.status, answer.text.slice(0, 300)).toBe(status)
    expect(answer.json.code).toBe(code)
  })

  it('a quoted boundary is as good as a bare one', async () => {
    const answer = await sendForm(form(smallTable), `multipart/form-data; boundary="${boundary}"`)
    expect(answer.status, answer.text).toBe(201)
  })

  it.each([
    ['../../../etc/cron.d/job', 'job'],
    ['..\\..\\boot.ini', 'boot.ini'],
    ['/absolute.csv', 'absolute.csv'],
    ['.', 'file'],
    ['a%00b.csv', 'a%00b.csv'],
    [`${'n'.repeat(300)}.csv`, `${'n'.repeat(196)}.csv`],
    ['nul', '_nul'],
    ['tab\tname.csv', 'tabname.csv'],
    ['gpj.\u202ecsv', 'gpj.csv'],
  ])('the name %j is kept as %j and never as a path', async (given, shown) => {
    const before = new Set(storedFiles())
    const answer = await upload(owner(), groupId, smallTable, given)
    expect(answer.status, answer.text).toBe(201)
    expect(answer.json.name).toBe(shown)
    const added = storedFiles().filter((path) => !before.has(path))
    expect(added).toHaveLength(1)
    expect(added[0]).toMatch(/\/files\/([0-9a-f]{2})\/\1[0-9a-f]{38}$/)
  })
})

describe('ids', () => {
  it('that are no ids of files are not found', async () => {
    for (const id of ['x', '..', randomUUID(), '%00', "'", '1'.repeat(400)]) {
      expect((await owner().get(`${filesPath()}/${id}/content`)).status).toBe(404)
      expect((await owner().remove(`${filesPath()}/${id}`)).status).toBe(404)
    }
  })
})
