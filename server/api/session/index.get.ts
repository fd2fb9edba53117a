import { findSignedIn } from '../../services/access.service'
import { toGroup, toUser } from '../../services/account-answer'
import { listOwnGroups } from '../../services/groups.service'
import { definePublicRoute } from '../../utils/define-route'
import { dropSessionCookie, hasSessionCookie, readSessionToken } from '../../utils/session-cookie'

/** Who is signed in: nobody is an answer too. A cookie that no longer opens anything is taken back. */
export default definePublicRoute({
  handler: async ({ event }) => {
    const token = await readSessionToken(event)
    const signedIn = token ? await findSignedIn(token) : null
    if (!signedIn) {
      if (hasSessionCookie(event)) dropSessionCookie(event)
      return { user: null, groups: [] }
    }
    return { user: toUser(signedIn.user), groups: (await listOwnGroups(signedIn.user.id)).map(toGroup) }
  },
})
