import { PasswordChangeSchema } from '../../../shared/schemas/account'
import { changePassword } from '../../services/accounts.service'
import { defineAccountRoute } from '../../utils/define-route'
import { writeSessionToken } from '../../utils/session-cookie'
import { visitorOf } from '../../utils/sign-in-context'

export default defineAccountRoute({
  body: PasswordChangeSchema,
  unstoredKeys: ['currentPassword', 'newPassword'],
  handler: async ({ event, body, user }) => {
    await writeSessionToken(event, await changePassword(user, body, await visitorOf(event, user.email)))
  },
})
