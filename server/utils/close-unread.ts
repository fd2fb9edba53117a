import type { H3Event } from 'h3'
import { hasBody } from './read-body'

const graceMs = 500

/**
 * An answer given before the whole body was read ends the connection: the rest of the body is neither stored nor
 * waited for. A short grace lets the client read the answer before the socket goes.
 */
export const closeUnreadRequest = (event: H3Event): void => {
  const { req, res } = event.node
  if (!hasBody(event) || req.complete) return
  if (!res.headersSent) res.setHeader('connection', 'close')
  const socket = res.socket
  req.pause()
  res.once('finish', () => setTimeout(() => socket?.destroy(), graceMs).unref())
}
