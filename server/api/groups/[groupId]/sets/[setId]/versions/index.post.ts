import { z } from 'zod'
import { SetVersionRequestSchema } from '../../../../../../../shared/schemas/set-requests'
import { saveParameterSet } from '../../../../../../services/parameter-sets.service'
import { toSetDetail } from '../../../../../../services/set-answer'
import { defineGroupRoute } from '../../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ setId: z.uuid() }),
  body: SetVersionRequestSchema,
  status: 201,
  handler: async ({ groupId, user, params, body }) =>
    toSetDetail(await saveParameterSet(groupId, user.id, params.setId, body)),
})
