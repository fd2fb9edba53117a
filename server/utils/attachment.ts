import contentDisposition from 'content-disposition'
import type { H3Event } from 'h3'
import { setResponseHeaders } from 'h3'

/** A download: always saved, never shown in our origin, whatever its bytes are. */
export const setAttachment = (event: H3Event, name: string, mediaType: string): void =>
  setResponseHeaders(event, {
    'content-type': mediaType,
    'content-disposition': contentDisposition(name, { type: 'attachment' }),
    'content-security-policy': "default-src 'none'; sandbox",
  })
