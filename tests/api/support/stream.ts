import { request as httpRequest } from 'node:http'
import type { Answer, Client } from './client'

/** Status and headers of an answer that does not end by itself, with the body of one that does (an error). */
export const readHead = (client: Client, path: string): Promise<Answer> => {
  const { hostname, port } = new URL(client.baseUrl)
  const cookie = [...client.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
  return new Promise((done, fail) => {
    const request = httpRequest({
      hostname,
      port,
      path,
      agent: false,
      headers: { cookie, accept: 'text/event-stream' },
    })
    request.once('error', fail)
    request.once('response', (response) => {
      const headers = new Headers()
      for (const [name, value] of Object.entries(response.headers)) headers.set(name, String(value))
      const finish = (bytes: Buffer) => {
        const text = bytes.toString('utf8')
        const json = /json/.test(headers.get('content-type') ?? '') && text ? JSON.parse(text) : undefined
        done({ status: response.statusCode ?? 0, headers, text, bytes, json })
      }
      if (response.statusCode === 200) {
        finish(Buffer.alloc(0))
        response.destroy()
        return
      }
      const chunks: Buffer[] = []
      response.on('data', (chunk: Buffer) => chunks.push(chunk))
      response.once('end', () => finish(Buffer.concat(chunks)))
    })
    request.end()
  })
}
