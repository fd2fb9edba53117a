import type { H3Event } from 'h3'
import { parse as parseJson } from 'secure-json-parse'
import { AppError, type Issue } from '../../shared/errors/app-error'

const tooLarge = (limit: number) =>
  new AppError('input/too-large', { detail: `This address takes at most ${limit} bytes; more were sent.` })

/**
 * Whole body, counted while it arrives: a length that is missing or wrong changes nothing. Beyond the limit the rest is
 * left unread and the request stays whole: destroying it would take the socket away from the answer.
 */
export const readLimited = (event: H3Event, limit: number): Promise<Buffer> => {
  const request = event.node.req
  if (Number(request.headers['content-length'] ?? 0) > limit) return Promise.reject(tooLarge(limit))
  return new Promise((done, fail) => {
    const chunks: Buffer[] = []
    let length = 0
    const stop = () => {
      request.off('data', onData).off('end', onEnd).off('error', onFailure).off('close', onClose)
    }
    const onData = (chunk: Buffer) => {
      length += chunk.length
      chunks.push(chunk)
      if (length <= limit) return
      stop()
      request.pause()
      fail(tooLarge(limit))
    }
    const onEnd = () => {
      stop()
      done(Buffer.concat(chunks, length))
    }
    const onFailure = (cause: unknown) => {
      stop()
      fail(new AppError('input/malformed', { detail: 'The request ended before its body did.', cause }))
    }
    const onClose = () => onFailure(undefined)
    request.on('data', onData).on('end', onEnd).on('error', onFailure).on('close', onClose)
  })
}

/** Whether the client announced a body, of whatever length. */
export const hasBody = (event: H3Event): boolean => {
  const { headers } = event.node.req
  return headers['transfer-encoding'] !== undefined || Number(headers['content-length'] ?? 0) > 0
}

/** The media type itself, without parameters, in lower case. */
export const mediaTypeOf = (event: H3Event): string =>
  (event.node.req.headers['content-type'] ?? '').split(';', 1)[0]?.trim().toLowerCase() ?? ''

export const requireMediaType = (event: H3Event, expected: string): void => {
  const found = mediaTypeOf(event)
  if (found === expected) return
  throw new AppError('input/media-type', {
    detail: `Expected the content type ${expected}; found ${found ? found.slice(0, 80) : 'none'}.`,
  })
}

/** JSON as the standard has it: UTF-8, no `__proto__` or `constructor.prototype` keys. */
export const parseBody = (bytes: Buffer): unknown => {
  let text: string
  try {
    text = new TextDecoder('utf-8', { fatal: true }).decode(bytes)
  } catch {
    throw new AppError('input/malformed', { detail: 'Expected JSON in UTF-8; found bytes that are not UTF-8.' })
  }
  if (text.trim() === '') throw new AppError('input/malformed', { detail: 'Expected a JSON body; found an empty one.' })
  try {
    return parseJson(text, { protoAction: 'error', constructorAction: 'error' })
  } catch (error) {
    const reason = error instanceof Error ? error.message.slice(0, 200) : 'unreadable'
    throw new AppError('input/malformed', { detail: `Expected JSON; ${reason}` })
  }
}

/**
 * PostgreSQL can store neither NUL nor half a surrogate pair, in text or in jsonb. Found here, such a text is answered
 * with its place instead of a database error. Keys named in `unstored` (passwords) never reach a text column.
 */
export const findUnstorableText = (value: unknown, unstored: readonly string[], path: Issue['path'] = []): Issue[] => {
  const wrong = (text: string) => text.includes('\0') || !text.isWellFormed()
  const issue = { path, message: 'expected text without NUL characters and broken surrogate pairs; found one' }
  if (typeof value === 'string') return wrong(value) ? [issue] : []
  if (Array.isArray(value)) return value.flatMap((item, index) => findUnstorableText(item, unstored, [...path, index]))
  if (typeof value !== 'object' || value === null) return []
  return Object.entries(value).flatMap(([key, item]) => {
    if (wrong(key)) return [{ ...issue, path: [...path, key] }]
    return unstored.includes(key) ? [] : findUnstorableText(item, unstored, [...path, key])
  })
}
