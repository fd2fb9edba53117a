import { randomUUID } from 'node:crypto'
import type { H3Event } from 'h3'

declare module 'h3' {
  interface H3EventContext {
    requestId?: string
    cspNonce?: string
    startedAt?: number
  }
}

/** Named by us, never by the client: an id from outside could be made to match someone else's log lines. */
export const requestIdOf = (event: H3Event): string => (event.context.requestId ??= randomUUID())
