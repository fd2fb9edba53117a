import { z } from 'zod'
import { cancelRun } from '../../../../../services/runs.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ runId: z.uuid() }),
  handler: ({ groupId, params }) => cancelRun(groupId, params.runId),
})
