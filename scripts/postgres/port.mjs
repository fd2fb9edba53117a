import { createServer } from 'node:net'

const listenOn = (port) =>
  new Promise((resolve) => {
    const server = createServer()
    server.once('error', () => resolve(null))
    server.listen({ port, host: '127.0.0.1', exclusive: true }, () => {
      const { port: taken } = server.address()
      server.close(() => resolve(taken))
    })
  })

/** True when nothing listens on this loopback port. */
export const isFree = async (port) => (await listenOn(port)) !== null

/** A loopback port that is free right now; the wanted one when it is. */
export const freePort = async (wanted) => (wanted && (await isFree(wanted)) ? wanted : listenOn(0))
