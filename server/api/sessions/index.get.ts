import { listOwnSessions } from '../../services/sessions.service'
import { defineAccountRoute } from '../../utils/define-route'

export default defineAccountRoute({
  handler: async (signedIn) => {
    const rows = await listOwnSessions(signedIn)
    return {
      sessions: rows.map((row) => ({
        id: row.id,
        current: row.current,
        userAgent: row.userAgent,
        createdAt: row.createdAt.toISOString(),
        lastSeenAt: row.lastSeenAt.toISOString(),
        expiresAt: row.expiresAt.toISOString(),
      })),
    }
  },
})
