import { RegistrationSchema } from '../../../shared/schemas/account'
import { toUser } from '../../services/account-answer'
import { register } from '../../services/accounts.service'
import { definePublicRoute } from '../../utils/define-route'
import { writeDeviceMark } from '../../utils/device-cookie'
import { writeSessionToken } from '../../utils/session-cookie'
import { visitorOf } from '../../utils/sign-in-context'

export default definePublicRoute({
  body: RegistrationSchema,
  unstoredKeys: ['password'],
  status: 201,
  handler: async ({ event, body }) => {
    const { user, token } = await register(body, await visitorOf(event, body.email))
    await writeSessionToken(event, token)
    writeDeviceMark(event, user.email)
    return { user: toUser(user) }
  },
})
