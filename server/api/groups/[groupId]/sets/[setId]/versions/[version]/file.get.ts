import { VersionParamsSchema } from '../../../../../../../../shared/schemas/set-requests'
import { toJsonFile } from '../../../../../../../../shared/utils/canonical'
import { getParameterSetVersion } from '../../../../../../../services/parameter-sets.service'
import { setAttachment } from '../../../../../../../utils/attachment'
import { defineGroupRoute } from '../../../../../../../utils/define-route'

/** The parameters alone, in canonical order: the same version always gives the same bytes. */
export default defineGroupRoute({
  access: 'viewer',
  params: VersionParamsSchema,
  handler: async ({ event, groupId, params }) => {
    const { set, version } = await getParameterSetVersion(groupId, params.setId, params.version)
    setAttachment(event, `${set.name} v${version.version}.json`, 'application/json')
    return toJsonFile(version.parameters)
  },
})
