import { z } from 'zod'
import { getParameterSet } from '../../../../../services/parameter-sets.service'
import { toSetDetail } from '../../../../../services/set-answer'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ setId: z.uuid() }),
  handler: async ({ groupId, params }) => toSetDetail(await getParameterSet(groupId, params.setId)),
})
