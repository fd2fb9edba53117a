import type { Readable } from 'node:stream'
import busboy from 'busboy'
import type { H3Event } from 'h3'
import { AppError } from '../../shared/errors/app-error'
import { limits } from '../../shared/utils/limits'
import { cleanFileName } from './file-name'
import { requireMediaType } from './read-body'

/** Boundary and headers of the one part, at most. */
const envelopeBytes = 64 * 1024

export const tooLargeFile = () =>
  new AppError('input/too-large', {
    detail: `A file may have at most ${limits.uploadBytes} bytes (64 MiB); more were sent.`,
  })

const malformed = (found: string) =>
  new AppError('input/malformed', { detail: `Expected a multipart form with one file; found ${found}.` })

const notOneFile = (found: string) =>
  new AppError('input/invalid', {
    detail: `Expected exactly one file; found ${found}.`,
    issues: [{ path: ['file'], message: `expected exactly one file; found ${found}` }],
  })

export interface Incoming<T> {
  /** Consumes the bytes. Rejecting ends the request with that error. */
  keep: (stream: Readable, name: string) => Promise<T>
  /** Takes back what `keep` did, when the rest of the request turns out to be bad. */
  undo: (kept: T) => Promise<void>
}

/** Length that the client announced for the whole request; 0 where it announced none. */
export const announcedBytes = (event: H3Event): number => Number(event.node.req.headers['content-length'] ?? 0) || 0

/**
 * One file of a multipart request, counted and handed on while it arrives. Nothing is buffered beyond the windows of
 * the streams; `readMultipartFormData` would hold the whole body in memory several times.
 */
export const receiveFile = async <T>(event: H3Event, { keep, undo }: Incoming<T>): Promise<T & { name: string }> => {
  requireMediaType(event, 'multipart/form-data')
  if (announcedBytes(event) > limits.uploadBytes + envelopeBytes) throw tooLargeFile()
  const request = event.node.req

  const open = () => {
    try {
      return busboy({
        headers: request.headers,
        defParamCharset: 'utf8',
        // busboy reports a limit as soon as it is reached, not when it is passed: one more byte makes the difference.
        limits: { fileSize: limits.uploadBytes + 1, files: 1, fields: 0, parts: 2, headerPairs: 32 },
      })
    } catch (error) {
      throw malformed(error instanceof Error ? error.message.slice(0, 100) : 'none')
    }
  }
  const parser = open()

  let current: Readable | undefined
  let keeping: Promise<T> | undefined
  let name = ''
  try {
    await new Promise<void>((resolve, reject) => {
      const cut = () => reject(malformed('a connection that was closed before the end'))
      request.once('error', cut)
      request.once('close', () => {
        if (!request.complete) cut()
      })
      parser.on('filesLimit', () => reject(notOneFile('a second one')))
      parser.on('fieldsLimit', () => reject(notOneFile('another field')))
      parser.on('partsLimit', () => reject(notOneFile('more parts')))
      parser.on('error', (error) => reject(malformed(error instanceof Error ? error.message.slice(0, 100) : 'none')))
      parser.on('file', (_field, stream, info) => {
        current = stream
        name = cleanFileName(info.filename ?? '')
        // The consumer hears of a broken stream by its iterator; without a listener of our own a consumer that gave up
        // before would leave the error to nobody.
        stream.on('error', () => undefined)
        stream.on('limit', () => reject(tooLargeFile()))
        keeping = keep(stream, name)
        keeping.catch(reject)
      })
      parser.on('close', resolve)
      request.pipe(parser)
    })
    if (keeping === undefined) throw notOneFile('none')
    return { ...(await keeping), name }
  } catch (error) {
    request.unpipe(parser)
    parser.removeAllListeners('error').on('error', () => undefined)
    // The consumer sees its stream break, takes back what it wrote, and only then is the answer given.
    current?.destroy(error instanceof Error ? error : undefined)
    parser.destroy()
    const kept = await keeping?.catch(() => undefined)
    if (kept !== undefined) await undo(kept)
    throw error
  }
}
