import { z } from 'zod'
import { SetRenameSchema } from '../../../../../../shared/schemas/set-requests'
import { renameParameterSet } from '../../../../../services/parameter-sets.service'
import { toSetDetail } from '../../../../../services/set-answer'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ setId: z.uuid() }),
  body: SetRenameSchema,
  handler: async ({ groupId, params, body }) => toSetDetail(await renameParameterSet(groupId, params.setId, body)),
})
