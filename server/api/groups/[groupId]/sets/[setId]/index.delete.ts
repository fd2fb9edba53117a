import { z } from 'zod'
import { removeParameterSet } from '../../../../../services/parameter-sets.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ setId: z.uuid() }),
  handler: ({ groupId, params }) => removeParameterSet(groupId, params.setId),
})
