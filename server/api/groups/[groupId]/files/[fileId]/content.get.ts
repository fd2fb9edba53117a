import { sendStream, setResponseHeaders } from 'h3'
import { z } from 'zod'
import { openFile } from '../../../../../services/files.service'
import { setAttachment } from '../../../../../utils/attachment'
import { defineGroupRoute } from '../../../../../utils/define-route'

/** The untouched bytes, always as a download of one fixed type: what was uploaded is never shown in our origin. */
export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ fileId: z.uuid() }),
  handler: async ({ event, groupId, params }) => {
    const { file, stream } = await openFile(groupId, params.fileId)
    setAttachment(event, file.name, 'application/octet-stream')
    setResponseHeaders(event, { 'content-length': file.byteLength, 'x-content-type-options': 'nosniff' })
    return sendStream(event, stream)
  },
})
