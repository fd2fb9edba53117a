import { signOut } from '../../services/accounts.service'
import { definePublicRoute } from '../../utils/define-route'
import { dropSessionCookie, hasSessionCookie, readSessionToken } from '../../utils/session-cookie'

/** Signing out always succeeds, also when the session had ended before. */
export default definePublicRoute({
  handler: async ({ event, requestId }) => {
    await signOut(await readSessionToken(event), requestId)
    if (hasSessionCookie(event)) dropSessionCookie(event)
  },
})
