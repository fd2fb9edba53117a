import { addFile, beginUpload, dropBytes, keepBytes } from '../../../../services/files.service'
import { toFileWithProposal } from '../../../../services/measurement-answer'
import { defineGroupRoute } from '../../../../utils/define-route'
import { announcedBytes, receiveFile } from '../../../../utils/receive-file'

/** One delimited text file, streamed to the store; the answer shows what was understood of it. */
export default defineGroupRoute({
  access: 'editor',
  body: 'stream',
  status: 201,
  handler: async ({ event, groupId, user }) => {
    const endUpload = await beginUpload(groupId, user.id, announcedBytes(event))
    try {
      const { name, ...kept } = await receiveFile(event, { keep: keepBytes, undo: dropBytes })
      return toFileWithProposal(await addFile(groupId, user.id, name, kept))
    } finally {
      endUpload()
    }
  },
})
