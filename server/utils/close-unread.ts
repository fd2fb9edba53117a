import type { H3Event } from 'h3'
import { hasBody } from './read-body'

const graceMs = 1000

/**
 * An answer given before the whole body was read ends the connection: the rest of the body is neither stored nor waited
 * for. Closing at once would reset the connection, and the client, still sending, would lose the answer with it; so our
 * half is closed first and the rest stays unread for a moment.
 */
export const closeUnreadRequest = (event: H3Event): void => {
  const { req, res } = event.node
  const { socket } = res
  if (!socket || !hasBody(event) || req.complete) return
  if (!res.headersSent) res.setHeader('connection', 'close')
  req.pause()
  res.prependOnceListener('finish', () => {
    // What Node calls on the last answer of a connection.
    socket.destroySoon = () => {
      socket.end()
      setTimeout(() => socket.destroy(), graceMs).unref()
    }
  })
}
