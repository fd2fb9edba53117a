import type { H3Event } from 'h3'

const graceMs = 500

/**
 * An answer given before the whole body was read ends the connection: the rest of the body is neither stored nor
 * waited for. A short grace lets the client read the answer before the socket goes.
 */
export const closeUnreadRequest = (event: H3Event): void => {
  const { req, res } = event.node
  const hasBody = req.headers['transfer-encoding'] !== undefined || Number(req.headers['content-length'] ?? 0) > 0
  if (!hasBody || req.complete) return
  if (!res.headersSent) res.setHeader('connection', 'close')
  req.pause()
  res.once('finish', () => setTimeout(() => req.socket.destroy(), graceMs).unref())
}
