import { defineEventHandler, setResponseHeader } from 'h3'
import { AppError } from '../../shared/errors/app-error'
import { refusesRequests } from '../utils/shutdown'

const safe = new Set(['GET', 'HEAD'])

/** Pages and files are only ever read; what can change something lives under /api and says its methods there. */
export default defineEventHandler((event) => {
  if (refusesRequests()) {
    setResponseHeader(event, 'connection', 'close')
    throw new AppError('service/unavailable', { retryAfterSeconds: 5 })
  }
  if (safe.has(event.method) || event.path.startsWith('/api/')) return
  setResponseHeader(event, 'allow', 'GET, HEAD')
  throw new AppError('request/method', { detail: `Expected GET or HEAD; found ${event.method}.` })
})
