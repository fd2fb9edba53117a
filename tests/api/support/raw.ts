import { connect, type Socket } from 'node:net'
import { multipartType } from './files'
import type { Client } from './client'

export interface RawAnswer {
  status: number
  text: string
  /** Milliseconds from the first byte sent to the answer's head. */
  waitedMs: number
  /** Bytes that the socket took before the answer came. */
  sentBytes: number
  /** Whether the server ended the connection. */
  closed: boolean
}

/** Head of a POST as text, so that a test may say anything in it. */
export const headOf = (client: Client, path: string, headers: Record<string, string>): string => {
  const cookie = [...client.cookies].map(([name, value]) => `${name}=${value}`).join('; ')
  const all = {
    host: new URL(client.baseUrl).host,
    'sec-fetch-site': 'same-origin',
    'content-type': multipartType,
    ...(cookie === '' ? {} : { cookie }),
    ...headers,
  }
  const lines = Object.entries(all).map(([name, value]) => `${name}: ${value}`)
  return [`POST ${path} HTTP/1.1`, ...lines, '', ''].join('\r\n')
}

export const openSocket = (client: Client): Promise<Socket> =>
  new Promise((done, fail) => {
    const { hostname, port } = new URL(client.baseUrl)
    const socket = connect(Number(port), hostname, () => done(socket))
    socket.once('error', fail)
  })

/** Sends pieces as fast as the server takes them and stops as soon as it answers. */
export const sendPieces = async (
  client: Client,
  path: string,
  headers: Record<string, string>,
  pieces: Iterable<Buffer>,
): Promise<RawAnswer> => {
  const socket = await openSocket(client)
  const started = performance.now()
  let received = ''
  let waitedMs = 0
  let sentBytes = 0
  let closed = false
  const ended = new Promise<void>((done) => {
    socket.on('data', (chunk: Buffer) => {
      waitedMs ||= performance.now() - started
      received += chunk.toString('latin1')
    })
    socket.on('error', () => undefined)
    socket.on('close', () => {
      closed = true
      done()
    })
  })
  const drained = () =>
    new Promise<void>((done) => {
      socket.once('drain', done)
      socket.once('close', done)
    })
  socket.write(headOf(client, path, headers))
  for (const piece of pieces) {
    if (closed || received !== '') break
    if (!socket.write(piece)) await drained()
    sentBytes += piece.length
    // Lets the answer in between two pieces.
    await new Promise((done) => setImmediate(done))
  }
  await Promise.race([ended, new Promise((done) => setTimeout(done, 90_000).unref())])
  socket.destroy()
  const status = Number(/^HTTP\/1\.1 (\d{3})/.exec(received)?.[1] ?? 0)
  return { status, text: received, waitedMs, sentBytes, closed }
}
