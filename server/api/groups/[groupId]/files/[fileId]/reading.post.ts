import { z } from 'zod'
import { ReadingRequestSchema } from '../../../../../../shared/schemas/measurement'
import { readFileAgain } from '../../../../../services/files.service'
import { toFileWithProposal } from '../../../../../services/measurement-answer'
import { defineGroupRoute } from '../../../../../utils/define-route'

/** The same file under a corrected reading; nothing is stored. */
export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ fileId: z.uuid() }),
  body: ReadingRequestSchema,
  handler: async ({ groupId, params, body }) => toFileWithProposal(await readFileAgain(groupId, params.fileId, body)),
})
