import { SignInSchema } from '../../../shared/schemas/account'
import { toGroup, toUser } from '../../services/account-answer'
import { signIn } from '../../services/accounts.service'
import { listOwnGroups } from '../../services/groups.service'
import { definePublicRoute } from '../../utils/define-route'
import { writeDeviceMark } from '../../utils/device-cookie'
import { writeSessionToken } from '../../utils/session-cookie'
import { visitorOf } from '../../utils/sign-in-context'

export default definePublicRoute({
  body: SignInSchema,
  unstoredKeys: ['password'],
  handler: async ({ event, body }) => {
    const visitor = await visitorOf(event, body.email)
    const { user, token } = await signIn(body, visitor)
    await writeSessionToken(event, token)
    if (!visitor.deviceMark) writeDeviceMark(event, user.email)
    return { user: toUser(user), groups: (await listOwnGroups(user.id)).map(toGroup) }
  },
})
