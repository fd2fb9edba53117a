import { z } from 'zod'
import { GivenPasswordSchema } from '../../../shared/schemas/account'
import { requirePassword } from '../../services/accounts.service'
import { confirmOwnSession } from '../../services/sessions.service'
import { defineAccountRoute } from '../../utils/define-route'
import { visitorOf } from '../../utils/sign-in-context'

/** The password once more, before something that an unattended browser must not do. */
export default defineAccountRoute({
  body: z.strictObject({ password: GivenPasswordSchema }),
  unstoredKeys: ['password'],
  handler: async ({ event, body, user, sessionId }) => {
    await requirePassword(user.id, body.password, await visitorOf(event, user.email), 'password')
    await confirmOwnSession(sessionId)
  },
})
