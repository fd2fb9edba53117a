import { toGroup } from '../../services/account-answer'
import { listOwnGroups } from '../../services/groups.service'
import { defineAccountRoute } from '../../utils/define-route'

export default defineAccountRoute({
  handler: async ({ user }) => ({ groups: (await listOwnGroups(user.id)).map(toGroup) }),
})
