import { randomUUID } from 'node:crypto'
import { expect } from 'vitest'
import type { Answer, Client } from './client'
import type { ObjectMaker } from './objects'

/** An invented spectrum that says everything a reader needs. */
export const smallTable = [
  'Energy (meV);absorbance',
  ...Array.from({ length: 40 }, (_, index) => `${1840 + index};${(1 / (1 + ((index - 12) / 4) ** 2)).toFixed(5)}`),
  '',
].join('\n')

export const smallReading = {
  encoding: 'utf-8',
  delimiter: 'semicolon',
  decimalMark: 'point',
  headerLines: 1,
  axisColumn: 0,
  valueColumn: 1,
  uncertaintyColumn: null,
  axisUnit: 'meV',
  applyJacobian: false,
}

export const boundary = 'test-boundary-7f3a'
export const multipartType = `multipart/form-data; boundary=${boundary}`

/** One part of a form as a browser writes it; `disposition` replaces what stands behind form-data. */
export const part = (content: string | Buffer, disposition = 'name="file"; filename="spectrum.csv"'): Buffer =>
  Buffer.concat([
    Buffer.from(
      `--${boundary}\r\ncontent-disposition: form-data; ${disposition}\r\ncontent-type: text/csv\r\n\r\n`,
      'utf8',
    ),
    Buffer.from(content),
    Buffer.from('\r\n'),
  ])

export const formEnd = Buffer.from(`--${boundary}--\r\n`)

export const form = (content: string | Buffer, fileName = 'spectrum.csv'): Buffer =>
  Buffer.concat([part(content, `name="file"; filename="${fileName}"`), formEnd])

export const uploadBody = () => ({ contentType: multipartType, body: form(smallTable) })

export const upload = (client: Client, groupId: string, content: string | Buffer, fileName?: string): Promise<Answer> =>
  client.send(`/api/groups/${groupId}/files`, {
    method: 'POST',
    contentType: multipartType,
    body: form(content, fileName),
  })

export const measurementBody = (fileId: string) => ({
  fileId,
  name: `Measurement ${randomUUID()}`,
  kind: 'absorption',
  sampleName: 'Sample T1 (invented)',
  temperatureK: 4,
  reading: smallReading,
})

export const makeFile: ObjectMaker = async ({ groupId, owner }) => {
  const answer = await upload(owner.client, groupId, smallTable)
  expect(answer.status, answer.text).toBe(201)
  return { fileId: answer.json.id }
}

export const makeMeasurement: ObjectMaker = async (context) => {
  const { fileId = '' } = await makeFile(context)
  const { groupId, owner } = context
  const answer = await owner.client.post(`/api/groups/${groupId}/measurements`, measurementBody(fileId))
  expect(answer.status, answer.text).toBe(201)
  return { fileId, measurementId: answer.json.id }
}
