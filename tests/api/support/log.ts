import { readFileSync } from 'node:fs'
import { inject, vi } from 'vitest'
import { Client } from './client'

const read = () => readFileSync(inject('logFile'), 'utf8')

/** The line about one request, once it came through the pipe. */
export const findLogLine = (requestId: string): Promise<string> =>
  vi.waitUntil(
    () =>
      read()
        .split('\n')
        .find((line) => line.includes(requestId)),
    { timeout: 20_000, interval: 25 },
  )

/** The whole log up to now: a refused request is sent and its line waited for, so everything before it is there. */
export const readLog = async (): Promise<string> => {
  const answer = await new Client().get('/api/nothing')
  await findLogLine(answer.json.requestId)
  return read()
}
