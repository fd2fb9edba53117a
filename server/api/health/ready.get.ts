import { definePublicRoute } from '../../utils/define-route'
import { AppError } from '../../../shared/errors/app-error'
import { isReady } from '../../services/health.service'

/** The process can do its work now: database reached, migrated as this build expects, not about to stop. */
export default definePublicRoute({
  handler: async () => {
    if (!(await isReady())) throw new AppError('service/unavailable', { retryAfterSeconds: 2 })
    return { status: 'ready' }
  },
})
