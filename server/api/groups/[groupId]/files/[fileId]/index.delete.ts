import { z } from 'zod'
import { removeGroupFile } from '../../../../../services/files.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ fileId: z.uuid() }),
  handler: ({ groupId, params }) => removeGroupFile(groupId, params.fileId),
})
