import { AppError } from '../../shared/errors/app-error'
import { hashOf } from '../../shared/utils/canonical'
import { getDatabase } from '../database/client'
import { forgetAttempts, giveBackAttempt, takeAttempt, type Pace } from '../database/repositories/attempts.repository'
import { logger } from '../utils/logger'

/**
 * Five guesses at once, then 30 s, 1, 2, 4, 8 minutes ...: at most nine within any quarter of an hour, one an hour in
 * the end, and never a lock for good. Addresses get more room, because a laboratory may share one.
 */
const accountPace: Pace = { free: 5, firstSeconds: 30, capSeconds: 3600 }
const addressPace: Pace = { free: 60, firstSeconds: 10, capSeconds: 900 }
const registrationPace: Pace = { free: 60, firstSeconds: 30, capSeconds: 3600 }

const take = async (key: string, pace: Pace, requestId: string): Promise<void> => {
  const seconds = await takeAttempt(getDatabase(), key, pace)
  if (seconds === 0) return
  logger.warn({ event: 'attempts.throttled', counter: key.split(':', 1)[0], requestId })
  throw new AppError('session/throttled', {
    detail: `Too many attempts; the next one is possible in ${seconds} s.`,
    retryAfterSeconds: seconds,
  })
}

export interface Attempt {
  /** It was right: the account's count starts anew. */
  succeed: () => Promise<void>
}

/** Counts a guess of a password by account (or by the account's known browser) and by address. */
export const beginGuess = async (guess: {
  email: string
  address: string
  deviceMark: string | null
  requestId: string
}): Promise<Attempt> => {
  const account = guess.deviceMark ? `device:${guess.deviceMark}` : `account:${hashOf(guess.email)}`
  const address = `address:${guess.address}`
  await take(address, addressPace, guess.requestId)
  await take(account, accountPace, guess.requestId)
  return {
    succeed: async () => {
      await forgetAttempts(getDatabase(), account)
      await giveBackAttempt(getDatabase(), address, addressPace)
    },
  }
}

export const countRegistration = (address: string, requestId: string): Promise<void> =>
  take(`registration:${address}`, registrationPace, requestId)
