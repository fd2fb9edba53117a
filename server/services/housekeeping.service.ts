import { getDatabase } from '../database/client'
import { removeOldAttempts } from '../database/repositories/attempts.repository'
import { readOwnPowers } from '../database/repositories/health.repository'
import { removeDeadSessions } from '../database/repositories/sessions.repository'
import { logger } from '../utils/logger'

/** Rows that no longer mean anything: ended sessions, counts of old attempts. Any process may do it, at any time. */
export const removeStaleRows = async (): Promise<void> => {
  await removeDeadSessions(getDatabase())
  await removeOldAttempts(getDatabase())
}

/** A role that no policy binds makes the second fence around the groups disappear without a sign. */
export const warnOfPowerfulRole = async (): Promise<void> => {
  const powers = await readOwnPowers(getDatabase())
  if (!powers.isSuperuser && !powers.bypassesRowSecurity) return
  logger.warn({
    event: 'database.role-too-powerful',
    ...powers,
    detail: 'DATABASE_URL: expected a role that obeys row level security; found a superuser or one with BYPASSRLS',
  })
}
