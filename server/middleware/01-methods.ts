import type { H3Event } from 'h3'
import { defineEventHandler, setResponseHeader } from 'h3'
import { AppError } from '../../shared/errors/app-error'
import { allowedMethods } from '../utils/route-table'
import { refusesRequests } from '../utils/shutdown'

/** Pages and files are only ever read. What can change something lives under /api and has a file for its method. */
const methodsAt = (event: H3Event): string[] =>
  event.path.startsWith('/api/') ? allowedMethods(event.path) : ['GET', 'HEAD']

export default defineEventHandler((event) => {
  if (refusesRequests()) {
    setResponseHeader(event, 'connection', 'close')
    throw new AppError('service/unavailable', { retryAfterSeconds: 5 })
  }
  const methods = methodsAt(event)
  // Without this the application's shell would answer every unknown address of the API.
  if (methods.length === 0) throw new AppError('request/not-found')
  if (methods.includes(event.method)) return
  setResponseHeader(event, 'allow', methods.join(', '))
  throw new AppError('request/method', { detail: `Expected ${methods.join(' or ')}; found ${event.method}.` })
})
