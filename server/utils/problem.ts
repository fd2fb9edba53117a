import type { H3Error, H3Event } from 'h3'
import { send, setResponseHeader, setResponseHeaders, setResponseStatus } from 'h3'
import { AppError } from '../../shared/errors/app-error'
import { errorCodes, type ErrorCode } from '../../shared/errors/codes'
import { isDatabaseDown } from '../database/outage'
import { closeUnreadRequest } from './close-unread'
import { logger } from './logger'
import { requestIdOf } from './request-context'

/** What the framework itself answers (no such route, wrong method, broken URL). */
const codeOfStatus: Record<number, ErrorCode> = {
  400: 'input/malformed',
  404: 'request/not-found',
  405: 'request/method',
  413: 'input/too-large',
  415: 'input/media-type',
}

const toAppError = (error: H3Error | Error): AppError => {
  for (let link: unknown = error, depth = 0; link instanceof Error && depth < 5; link = link.cause, depth++) {
    if (link instanceof AppError) return link
  }
  if (isDatabaseDown(error)) return new AppError('service/unavailable', { cause: error })
  const status = 'statusCode' in error && !error.unhandled ? error.statusCode : 500
  const code = codeOfStatus[status]
  return new AppError(code ?? 'service/internal', { cause: error })
}

const logProblem = (event: H3Event, problem: AppError, error: Error): void => {
  const entry = {
    event: problem.status >= 500 ? 'request.failed' : 'request.refused',
    requestId: requestIdOf(event),
    method: event.method,
    path: event.path.split('?', 1)[0]?.slice(0, 200),
    status: problem.status,
    code: problem.code,
  }
  if (problem.status >= 500) logger.error({ ...entry, err: error })
  else logger.info(entry)
}

export const sendProblem = (event: H3Event, error: H3Error | Error): Promise<void> | void => {
  const problem = toAppError(error)
  logProblem(event, problem, error)
  if (event.node.res.headersSent) {
    // Half an answer cannot be mended; cutting it tells the client that it is not whole.
    event.node.res.destroy()
    return
  }
  closeUnreadRequest(event)
  for (const name of ['content-disposition', 'content-length', 'etag', 'last-modified'])
    event.node.res.removeHeader(name)
  setResponseStatus(event, problem.status)
  setResponseHeaders(event, { 'content-type': 'application/problem+json', 'cache-control': 'no-store' })
  if (problem.retryAfterSeconds !== undefined) setResponseHeader(event, 'retry-after', problem.retryAfterSeconds)
  const body = {
    type: 'about:blank',
    title: errorCodes[problem.code].title,
    status: problem.status,
    code: problem.code,
    detail: problem.detail,
    requestId: requestIdOf(event),
    issues: problem.issues,
  }
  return send(event, JSON.stringify(body))
}
