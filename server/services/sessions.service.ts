import { randomBytes } from 'node:crypto'
import { AppError } from '../../shared/errors/app-error'
import { hashOf } from '../../shared/utils/canonical'
import { getDatabase } from '../database/client'
import {
  confirmSession,
  createSession,
  listSessions,
  removeSession,
  removeSessionByToken,
} from '../database/repositories/sessions.repository'
import { logger } from '../utils/logger'
import type { SignedIn } from './access.service'

/** After this long a session must give the password again before it ends other ones. */
const confirmationMinutes = 60

/** 256 random bits; the database keeps only their hash, so a copy of it opens nothing. */
export const newToken = (): { token: string; tokenHash: string } => {
  const token = randomBytes(32).toString('base64url')
  return { token, tokenHash: hashOf(token) }
}

export const endSessionOfToken = (token: string): Promise<string | null> =>
  removeSessionByToken(getDatabase(), hashOf(token))

/** A fresh session; the one that this browser held before ends. */
export const openSession = async (
  userId: string,
  browser: { userAgent: string; previousToken: string | null },
): Promise<string> => {
  if (browser.previousToken) await endSessionOfToken(browser.previousToken)
  const { token, tokenHash } = newToken()
  await createSession(getDatabase(), { userId, tokenHash, userAgent: browser.userAgent })
  return token
}

export const listOwnSessions = async ({ user, sessionId }: SignedIn) => {
  const rows = await listSessions(getDatabase(), user.id)
  return rows.map((row) => ({ ...row, current: row.id === sessionId }))
}

/** Another browser is only signed out by someone who gave the password lately: an open browser is not enough. */
export const endOwnSession = async (signedIn: SignedIn, sessionId: string, requestId: string): Promise<void> => {
  const isOther = sessionId !== signedIn.sessionId
  if (isOther && signedIn.minutesSinceConfirmed > confirmationMinutes) throw new AppError('session/confirm-password')
  if (!(await removeSession(getDatabase(), signedIn.user.id, sessionId))) throw new AppError('request/not-found')
  logger.info({ event: 'session.ended', userId: signedIn.user.id, other: isOther, requestId })
}

export const confirmOwnSession = (sessionId: string): Promise<void> => confirmSession(getDatabase(), sessionId)
