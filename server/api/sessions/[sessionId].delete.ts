import { z } from 'zod'
import { endOwnSession } from '../../services/sessions.service'
import { defineAccountRoute } from '../../utils/define-route'
import { dropSessionCookie } from '../../utils/session-cookie'

export default defineAccountRoute({
  params: z.strictObject({ sessionId: z.uuid() }),
  handler: async ({ event, params, requestId, ...signedIn }) => {
    await endOwnSession(signedIn, params.sessionId, requestId)
    if (params.sessionId === signedIn.sessionId) dropSessionCookie(event)
  },
})
