import { request as httpRequest, type IncomingMessage } from 'node:http'
import type { Client } from '../support/client'

export interface RunMessage {
  at: number
  id: string
  state: string
  progress: number
  secondsLeft: number | null
}

export interface OpenStream {
  status: number
  body: () => string
  messages: RunMessage[]
  /** True once the server ended the answer or the connection. */
  isClosed: () => boolean
  close: () => void
}

const parse = (block: string): RunMessage | undefined => {
  const at = /^id: (\d+)$/m.exec(block)?.[1]
  const data = /^data: (.*)$/m.exec(block)?.[1]
  if (!/^event: run$/m.test(block) || !at || !data) return undefined
  return { ...(JSON.parse(data) as Omit<RunMessage, 'at'>), at: Number(at) }
}

/** Reads a group's events as a page does, with the session of a client. */
export const openEvents = (client: Client, groupId: string, lastEventId?: string): Promise<OpenStream> => {
  const { hostname, port } = new URL(client.baseUrl)
  const cookie = [...client.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
  const headers = {
    accept: 'text/event-stream',
    'sec-fetch-site': 'same-origin',
    cookie,
    ...(lastEventId ? { 'last-event-id': lastEventId } : {}),
  }
  return new Promise((done, fail) => {
    const request = httpRequest({ hostname, port, path: `/api/groups/${groupId}/events`, agent: false, headers })
    request.once('error', fail)
    request.once('response', (response: IncomingMessage) => {
      const messages: RunMessage[] = []
      let text = ''
      let rest = ''
      let closed = false
      response.on('data', (part: Buffer) => {
        text += part.toString()
        const blocks = (rest + part.toString()).split('\n\n')
        rest = blocks.pop() ?? ''
        for (const block of blocks) {
          const message = parse(block)
          if (message) messages.push(message)
        }
      })
      for (const end of ['end', 'error', 'close']) response.on(end, () => (closed = true))
      const close = () => void response.destroy()
      done({ status: response.statusCode ?? 0, body: () => text, messages, isClosed: () => closed, close })
    })
    request.end()
  })
}
