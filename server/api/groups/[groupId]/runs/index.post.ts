import { RunRequestSchema } from '../../../../../shared/schemas/run'
import { createRun } from '../../../../services/runs.service'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  body: RunRequestSchema,
  status: 201,
  handler: ({ groupId, user, body }) => createRun({ groupId, userId: user.id, ...body }),
})
