import { createServer, connect, type Server, type Socket } from 'node:net'

/** A line to PostgreSQL that can be cut and mended, without touching the server that other tests use. */
export interface DatabaseProxy {
  url: string
  cut: () => Promise<void>
  mend: () => Promise<void>
  close: () => Promise<void>
}

export const openProxy = async (databaseUrl: string, options: { cut?: boolean } = {}): Promise<DatabaseProxy> => {
  const target = new URL(databaseUrl)
  const sockets = new Set<Socket>()
  let server: Server | undefined
  let port = 0

  const listen = () =>
    new Promise<void>((done, fail) => {
      server = createServer((near) => {
        const far = connect(Number(target.port), target.hostname)
        for (const [one, other] of [
          [near, far],
          [far, near],
        ] as const) {
          sockets.add(one)
          one.on('error', () => undefined)
          one.on('close', () => {
            sockets.delete(one)
            other.destroy()
          })
          one.pipe(other)
        }
      })
      server.once('error', fail)
      server.listen(port, '127.0.0.1', () => {
        port = (server?.address() as { port: number }).port
        done()
      })
    })
  const cut = async () => {
    const closing = server
    server = undefined
    const closed = new Promise((done) => (closing ? closing.close(done) : done(undefined)))
    for (const socket of sockets) socket.resetAndDestroy()
    await closed
  }

  await listen()
  if (options.cut) await cut()
  const url = new URL(databaseUrl)
  url.port = String(port)
  return { url: url.href, cut, mend: listen, close: cut }
}
