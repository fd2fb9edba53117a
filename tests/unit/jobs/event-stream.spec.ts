import { createServer, type Server } from 'node:http'
import { connect, type AddressInfo, type Socket } from 'node:net'
import { setTimeout as pause } from 'node:timers/promises'
import { afterEach, describe, expect, it } from 'vitest'
import { createApp, defineEventHandler, toNodeListener } from 'h3'
import { openEventStream, type EventStream } from '../../../server/utils/event-stream'

let server: Server | undefined
const sockets: Socket[] = []

afterEach(async () => {
  for (const socket of sockets.splice(0)) socket.destroy()
  await new Promise((done) => (server ? server.close(done) : done(undefined)))
  server = undefined
})

/** One client on one stream; the server's end is handed out. */
const open = async (): Promise<{ stream: EventStream; socket: Socket; text: () => string }> => {
  const opened = new Promise<EventStream>((resolve) => {
    const app = createApp()
    app.use(
      defineEventHandler(async (event) => {
        const stream = openEventStream(event)
        resolve(stream)
        await stream.closed
      }),
    )
    server = createServer(toNodeListener(app))
  })
  await new Promise<void>((done) => server?.listen(0, '127.0.0.1', done))
  const socket = connect((server?.address() as AddressInfo).port, '127.0.0.1')
  sockets.push(socket)
  let text = ''
  socket.on('data', (part: Buffer) => (text += part.toString()))
  socket.on('error', () => undefined)
  socket.write('GET / HTTP/1.1\r\nHost: localhost\r\n\r\n')
  return { stream: await opened, socket, text: () => text }
}

const seen = async (text: () => string, part: string) => {
  for (let tries = 0; tries < 100 && !text().includes(part); tries++) await pause(20)
  expect(text()).toContain(part)
}

describe('an event stream', () => {
  it('sends messages with id, name and data as they come', async () => {
    const { stream, text } = await open()
    stream.send('a', { id: 7, event: 'run', data: { id: 'a', progress: 0.5 } })
    await seen(text, 'id: 7\nevent: run\ndata: {"id":"a","progress":0.5}\n\n')
    expect(text()).toContain('content-type: text/event-stream')
    expect(text()).toContain('x-accel-buffering: no')
  })

  it('cannot be made to say anything by line breaks in the data', async () => {
    const { stream, text } = await open()
    stream.send('a', { id: 1, event: 'run', data: 'x\r\n\r\nevent: forged\ndata: y' })
    await seen(text, '\\r\\n\\r\\nevent: forged')
    expect(text()).not.toMatch(/^event: forged/m)
  })

  it('ends when the client goes, and when it is closed', async () => {
    const first = await open()
    first.socket.destroy()
    await first.stream.closed
    await new Promise((done) => server?.close(done))
    const second = await open()
    const over = new Promise((done) => second.socket.once('end', done))
    second.stream.close()
    await Promise.all([second.stream.closed, over])
    second.stream.send('a', { id: 1, event: 'run', data: 1 })
  })

  it('keeps one message a run for a client that does not read, and sends the newest when it does', async () => {
    const { stream, socket, text } = await open()
    socket.pause()
    const padding = 'x'.repeat(2000)
    let closed = false
    void stream.closed.then(() => (closed = true))
    for (let round = 1; round <= 5000; round++) {
      stream.send(`run ${round % 10}`, { id: round, event: 'run', data: { round, padding } })
      if (round % 50 === 0) await pause(0)
    }
    expect(closed).toBe(false)
    socket.resume()
    await seen(text, '"round":5000')
    const ids = [...text().matchAll(/^id: (\d+)$/gm)].map((match) => Number(match[1]))
    expect([...ids].sort((a, b) => a - b)).toEqual(ids)
    expect(ids.length).toBeLessThan(5000)
    // The last word on each of the ten runs arrived.
    expect(ids.slice(-10)).toEqual(Array.from({ length: 10 }, (_, index) => 4991 + index))
  })

  it('cuts a client that leaves a megabyte unread', async () => {
    const { stream, socket } = await open()
    socket.pause()
    let sent = 0
    let closed = false
    void stream.closed.then(() => (closed = true))
    const padding = 'x'.repeat(10_000)
    while (!closed && sent < 5000) {
      stream.send(`run ${sent}`, { id: ++sent, event: 'run', data: padding })
      if (sent % 10 === 0) await pause(0)
    }
    // What the two sockets buffer, and a megabyte of ours.
    expect(closed).toBe(true)
    expect(sent * 10_000).toBeLessThan(12 * 1024 * 1024)
  })
})
