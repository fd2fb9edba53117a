import { SetRequestSchema } from '../../../../../shared/schemas/set-requests'
import { createParameterSet } from '../../../../services/parameter-sets.service'
import { toSetDetail } from '../../../../services/set-answer'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  body: SetRequestSchema,
  status: 201,
  handler: async ({ groupId, user, body }) => toSetDetail(await createParameterSet(groupId, user.id, body)),
})
