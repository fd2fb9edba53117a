import { z } from 'zod'
import { retryRun } from '../../../../../services/runs.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ runId: z.uuid() }),
  handler: ({ groupId, user, params }) => retryRun({ groupId, userId: user.id, runId: params.runId }),
})
