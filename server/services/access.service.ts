import { AppError } from '../../shared/errors/app-error'
import { isAtLeast, type Role } from '../../shared/schemas/roles'
import { hashOf } from '../../shared/utils/canonical'
import { getDatabase } from '../database/client'
import { findGroupOfUser } from '../database/repositories/groups.repository'
import { findSession, touchSession } from '../database/repositories/sessions.repository'

export interface SignedIn {
  sessionId: string
  minutesSinceConfirmed: number
  user: { id: string; email: string; name: string }
}

/** Who holds this token, decided by the session row on every request; null when nobody does any more. */
export const findSignedIn = async (token: string): Promise<SignedIn | null> => {
  const row = await findSession(getDatabase(), hashOf(token))
  if (!row) return null
  if (row.stale) await touchSession(getDatabase(), row.sessionId)
  return { sessionId: row.sessionId, minutesSinceConfirmed: row.minutesSinceConfirmed, user: row.user }
}

/**
 * The one place where roles are checked. A group that does not exist and one that the user does not belong to give the
 * same answer; only members learn that their role is too weak.
 */
export const requireMembership = async (groupId: string, userId: string, needed: Role): Promise<Role> => {
  const group = await findGroupOfUser(getDatabase(), groupId, userId)
  if (!group) throw new AppError('request/not-found')
  if (!isAtLeast(group.role, needed)) {
    throw new AppError('group/role', { detail: `This needs the role ${needed}; yours is ${group.role}.` })
  }
  return group.role
}
