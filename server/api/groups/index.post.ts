import { GroupRequestSchema } from '../../../shared/schemas/group'
import { toGroup } from '../../services/account-answer'
import { openGroup } from '../../services/groups.service'
import { defineAccountRoute } from '../../utils/define-route'

export default defineAccountRoute({
  body: GroupRequestSchema,
  status: 201,
  handler: async ({ body, user }) => toGroup(await openGroup(body, user.id)),
})
