import { getRequestHeader, setResponseHeaders, setResponseStatus } from 'h3'
import { z } from 'zod'
import { readArray } from '../../../../../../services/runs.service'
import { defineGroupRoute } from '../../../../../../utils/define-route'

/** Header values are ASCII; a unit that is not comes percent-encoded. */
const toHeader = (unit: string) => (/^[\x20-\x7e]*$/.test(unit) ? unit : encodeURIComponent(unit))

/** Raw little-endian bytes, row by row; type, shape and unit are in the headers. */
export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ runId: z.uuid(), key: z.string().min(1).max(200) }),
  handler: async ({ event, groupId, params }) => {
    const array = await readArray(groupId, params.runId, params.key)
    const etag = `"${array.sha256}"`
    setResponseHeaders(event, {
      'content-type': 'application/octet-stream',
      'x-array-type': array.dataType,
      'x-array-shape': array.shape.join(','),
      'x-array-unit': toHeader(array.unit),
      etag,
    })
    if (getRequestHeader(event, 'if-none-match') === etag) {
      setResponseStatus(event, 304)
      return ''
    }
    return array.bytes
  },
})
