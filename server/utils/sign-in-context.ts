import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { useRuntimeConfig } from 'nitropack/runtime'
import type { Visitor } from '../services/accounts.service'
import { clientAddressOf } from './client-address'
import { readDeviceMark } from './device-cookie'
import { requestIdOf } from './request-context'
import { readSessionToken } from './session-cookie'

/** What a service may know about the browser that asks to sign in. */
export const visitorOf = async (event: H3Event, email: string): Promise<Visitor> => ({
  address: clientAddressOf(
    event.node.req.socket.remoteAddress,
    event.node.req.headers,
    Number(useRuntimeConfig(event).trustedProxies),
  ),
  deviceMark: readDeviceMark(event, email),
  userAgent: (getRequestHeader(event, 'user-agent') ?? '').replace(/[^\x20-\x7e]/g, '').slice(0, 200),
  previousToken: await readSessionToken(event),
  requestId: requestIdOf(event),
})
