import { definePublicRoute } from '../../utils/define-route'

/** The process answers. Says nothing about what it depends on: a restart would not mend those. */
export default definePublicRoute({ handler: () => ({ status: 'live' }) })
