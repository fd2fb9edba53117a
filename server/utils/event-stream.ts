import type { H3Event } from 'h3'

/** Bytes and time for which a client may leave its events unread. */
const unsentLimit = 1024 * 1024
const stalledMs = 30_000
const pingMs = 15_000

export interface EventStream {
  /** A later message of the same key replaces one that could not be sent yet. */
  send: (key: string, message: { id: number; event: string; data: unknown }) => void
  close: () => void
  closed: Promise<void>
}

/**
 * Server-sent events over a plain answer. A client that does not read costs a bounded amount: what it has not taken is
 * kept as one message a key, and past a limit of bytes or time its connection is cut.
 */
export const openEventStream = (event: H3Event): EventStream => {
  const { req, res } = event.node
  const waiting = new Map<string, string>()
  let waitingBytes = 0
  let stalledSince: number | undefined
  let over = false
  let resolveClosed!: () => void
  const closed = new Promise<void>((resolve) => (resolveClosed = resolve))

  const finish = (end: () => void) => {
    if (over) return
    over = true
    clearInterval(ping)
    waiting.clear()
    end()
    resolveClosed()
  }
  const close = () => finish(() => res.end())
  const cut = () => finish(() => res.destroy())
  const overLimit = () =>
    waitingBytes + res.writableLength > unsentLimit ||
    (stalledSince !== undefined && performance.now() - stalledSince > stalledMs)

  const flush = () => {
    for (const [key, text] of waiting) {
      if (over || res.writableNeedDrain) break
      waiting.delete(key)
      waitingBytes -= Buffer.byteLength(text)
      res.write(text)
    }
    stalledSince = res.writableNeedDrain ? (stalledSince ?? performance.now()) : undefined
    if (!over && overLimit()) cut()
  }
  const ping = setInterval(() => {
    if (!res.writableNeedDrain) res.write(': ping\n\n')
    flush()
  }, pingMs)

  res.on('drain', () => {
    stalledSince = undefined
    flush()
  })
  for (const side of [req, res]) side.on('close', cut)
  res.on('error', cut)
  res.writeHead(200, {
    'content-type': 'text/event-stream',
    'cache-control': 'no-store',
    connection: 'close',
    // Proxies would otherwise collect events until a buffer is full.
    'x-accel-buffering': 'no',
  })
  res.write('retry: 2000\n\n')

  return {
    send: (key, message) => {
      if (over) return
      const before = waiting.get(key)
      if (before !== undefined) waitingBytes -= Buffer.byteLength(before)
      const text = `id: ${message.id}\nevent: ${message.event}\ndata: ${JSON.stringify(message.data)}\n\n`
      // Taken out first, so that the newest message goes to the end.
      waiting.delete(key)
      waiting.set(key, text)
      waitingBytes += Buffer.byteLength(text)
      flush()
    },
    close,
    closed,
  }
}
