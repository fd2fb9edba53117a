import { VersionParamsSchema } from '../../../../../../../../shared/schemas/set-requests'
import { getParameterSetVersion } from '../../../../../../../services/parameter-sets.service'
import { toVersion } from '../../../../../../../services/set-answer'
import { defineGroupRoute } from '../../../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  params: VersionParamsSchema,
  handler: async ({ groupId, params }) =>
    toVersion((await getParameterSetVersion(groupId, params.setId, params.version)).version),
})
