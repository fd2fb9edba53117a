import { AppError } from '../../shared/errors/app-error'
import type { PasswordChange, Registration, SignIn } from '../../shared/schemas/account'
import { getDatabase } from '../database/client'
import { listGroupsOfUser } from '../database/repositories/groups.repository'
import { createSession, removeSessionsOf } from '../database/repositories/sessions.repository'
import { createUser, findUserByEmail, getUser, updatePasswordHash } from '../database/repositories/users.repository'
import { withTransaction } from '../database/transaction'
import { logger } from '../utils/logger'
import { beginGuess, countRegistration } from './attempts.service'
import { findPasswordObjection } from './password-blocklist'
import { isHashOutdated, isPasswordOf, makePasswordHash } from './password-hash'
import { endSessionOfToken, newToken, openSession } from './sessions.service'

/** What is known of the browser that asks. */
export interface Visitor {
  address: string
  deviceMark: string | null
  userAgent: string
  /** Token of the session that this browser still holds; it ends when another begins. */
  previousToken: string | null
  requestId: string
}

export interface Entered {
  user: { id: string; email: string; name: string }
  token: string
}

const refuseCommon = async (password: string, context: string[], path: string): Promise<void> => {
  const objection = await findPasswordObjection(password, context)
  if (objection) throw new AppError('account/password-common', { issues: [{ path: [path], message: objection }] })
}

export const register = async (registration: Registration, visitor: Visitor): Promise<Entered> => {
  const { email, name, password } = registration
  await countRegistration(visitor.address, visitor.requestId)
  await refuseCommon(password, [name, email], 'password')
  // Hashed before the address is looked up, so that a taken address costs the same time as a free one.
  const passwordHash = await makePasswordHash(password)
  const userId = await createUser(getDatabase(), { email, name, passwordHash })
  if (!userId) {
    logger.info({ event: 'account.refused', reason: 'address taken', requestId: visitor.requestId })
    const message = 'expected an address without an account; found one that has an account already'
    throw new AppError('account/email-taken', { issues: [{ path: ['email'], message }] })
  }
  logger.info({ event: 'account.created', userId, requestId: visitor.requestId })
  return { user: { id: userId, email, name }, token: await openSession(userId, visitor) }
}

export const signIn = async ({ email, password }: SignIn, visitor: Visitor): Promise<Entered> => {
  const attempt = await beginGuess({ email, ...visitor })
  const found = await findUserByEmail(getDatabase(), email)
  const right = await isPasswordOf(found?.passwordHash, password)
  if (!found || !right) {
    logger.warn({ event: 'session.refused', userId: found?.id, requestId: visitor.requestId })
    throw new AppError('session/invalid-credentials')
  }
  await attempt.succeed()
  if (isHashOutdated(found.passwordHash)) {
    await updatePasswordHash(getDatabase(), found.id, await makePasswordHash(password))
  }
  const token = await openSession(found.id, visitor)
  logger.info({ event: 'session.opened', userId: found.id, requestId: visitor.requestId })
  return { user: { id: found.id, email: found.email, name: found.name }, token }
}

/** The password once more, by the person who is signed in already. Counted like any other guess. */
export const requirePassword = async (
  userId: string,
  password: string,
  visitor: Visitor,
  path: string,
): Promise<void> => {
  const user = await getUser(getDatabase(), userId)
  const attempt = await beginGuess({ email: user.email, ...visitor })
  if (!(await isPasswordOf(user.passwordHash, password))) {
    logger.warn({ event: 'session.confirmation-refused', userId, requestId: visitor.requestId })
    throw new AppError('session/confirm-password', {
      detail: 'This is not your present password.',
      issues: [{ path: [path], message: 'expected your present password; found another text' }],
    })
  }
  await attempt.succeed()
}

/** Ends every session of the account and opens a new one for this browser. */
export const changePassword = async (
  user: { id: string; email: string; name: string },
  change: PasswordChange,
  visitor: Visitor,
): Promise<string> => {
  await requirePassword(user.id, change.currentPassword, visitor, 'currentPassword')
  const groups = await listGroupsOfUser(getDatabase(), user.id)
  await refuseCommon(change.newPassword, [user.name, user.email, ...groups.map((group) => group.name)], 'newPassword')
  const passwordHash = await makePasswordHash(change.newPassword)
  const { token, tokenHash } = newToken()
  const ended = await withTransaction(async (transaction) => {
    await updatePasswordHash(transaction, user.id, passwordHash)
    const count = await removeSessionsOf(transaction, user.id)
    await createSession(transaction, { userId: user.id, tokenHash, userAgent: visitor.userAgent })
    return count
  })
  logger.info({
    event: 'account.password-changed',
    userId: user.id,
    sessionsEnded: ended,
    requestId: visitor.requestId,
  })
  return token
}

/** Leaves no session of this browser behind. */
export const signOut = async (token: string | null, requestId: string): Promise<void> => {
  if (!token) return
  const userId = await endSessionOfToken(token)
  if (userId) logger.info({ event: 'session.ended', userId, requestId })
}
