import { z } from 'zod'
import { getRun } from '../../../../../services/runs.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ runId: z.uuid() }),
  handler: ({ groupId, params }) => getRun(groupId, params.runId),
})
