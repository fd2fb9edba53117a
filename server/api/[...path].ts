import { definePublicRoute } from '../utils/define-route'
import { setResponseHeader } from 'h3'
import { AppError } from '../../shared/errors/app-error'
import { allowedMethods } from '../utils/route-table'

/** What no other file of this folder answers: 405 where the path exists under another method, else 404. */
export default definePublicRoute({
  body: 'stream',
  handler: ({ event }) => {
    const methods = allowedMethods(event.path)
    if (methods.length === 0) throw new AppError('request/not-found')
    setResponseHeader(event, 'allow', methods.join(', '))
    throw new AppError('request/method', { detail: `Expected ${methods.join(' or ')}; found ${event.method}.` })
  },
})
