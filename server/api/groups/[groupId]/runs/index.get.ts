import { z } from 'zod'
import { listRuns } from '../../../../services/runs.service'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  query: z.strictObject({ setId: z.uuid().optional() }),
  handler: async ({ groupId, query }) => ({ runs: await listRuns(groupId, query) }),
})
