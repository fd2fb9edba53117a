import { z } from 'zod'
import { listParameterSetVersions } from '../../../../../../services/parameter-sets.service'
import { toVersionItem } from '../../../../../../services/set-answer'
import { defineGroupRoute } from '../../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ setId: z.uuid() }),
  handler: async ({ groupId, params }) => ({
    versions: (await listParameterSetVersions(groupId, params.setId)).map(toVersionItem),
  }),
})
