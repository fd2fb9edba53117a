import { createServer, connect, type Socket } from 'node:net'

/** A wire between a program and PostgreSQL that can be cut and mended. */
export const startProxy = async (target: { host: string; port: number }) => {
  const open = new Set<Socket>()
  let isCut = false
  const server = createServer((near) => {
    if (isCut) {
      near.destroy()
      return
    }
    const far = connect(target.port, target.host)
    for (const [socket, other] of [
      [near, far],
      [far, near],
    ] as const) {
      open.add(socket)
      socket.on('error', () => undefined)
      socket.on('close', () => {
        open.delete(socket)
        other.destroy()
      })
      socket.pipe(other)
    }
  })
  await new Promise<void>((done) => server.listen(0, '127.0.0.1', done))
  const address = server.address()
  return {
    port: typeof address === 'object' && address ? address.port : 0,
    cut: () => {
      isCut = true
      for (const socket of open) socket.destroy()
    },
    mend: () => {
      isCut = false
    },
    close: () => {
      for (const socket of open) socket.destroy()
      return new Promise<void>((done) => server.close(() => done()))
    },
  }
}
