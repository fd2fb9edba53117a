import { randomBytes } from 'node:crypto'
import pLimit from 'p-limit'
import { hashPassword, passwordNeedsReHash, useRuntimeConfig, verifyPassword } from '#imports'
import { AppError } from '../../shared/errors/app-error'
import { logger } from '../utils/logger'

/**
 * A hash takes a third of a second of a thread and 128 MiB. Two at a time leave the other threads of libuv to files and
 * name look-ups; beyond a short queue it is kinder to say no at once.
 */
const atOnce = 2
const waiting = 30
const limit = pLimit(atOnce)

const queued = <T>(work: () => Promise<T>): Promise<T> => {
  if (limit.pendingCount >= waiting) {
    throw new AppError('service/unavailable', {
      detail: 'Too many people sign in at this moment; try again shortly.',
      retryAfterSeconds: 10,
    })
  }
  return limit(work)
}

/** Unicode has several spellings of the same letters; NFKC makes a password independent of the keyboard it came from. */
const normalize = (password: string): string => password.normalize('NFKC')

/** One line a hash, so that it can be seen that known and unknown accounts cost the same. */
const note = (): void => logger.debug({ event: 'password.hash' })

export const makePasswordHash = (password: string): Promise<string> =>
  queued(() => {
    note()
    return hashPassword(normalize(password))
  })

const base64 = (length: number): string => randomBytes(length).toString('base64').replace(/=+$/, '')

/** A hash of nothing anyone knows, at the present cost: an unknown account takes as long as a wrong password. */
const unknownAccountHash = (): string => {
  const { cost, blockSize, parallelization } = useRuntimeConfig().hash.scrypt as Record<string, number>
  return `$scrypt$n=${cost},r=${blockSize},p=${parallelization}$${base64(16)}$${base64(64)}`
}

export const isPasswordOf = (passwordHash: string | undefined, password: string): Promise<boolean> =>
  queued(async () => {
    note()
    const right = await verifyPassword(passwordHash ?? unknownAccountHash(), normalize(password))
    return right && passwordHash !== undefined
  })

/** True for a hash made at an earlier cost. */
export const isHashOutdated = (passwordHash: string): boolean => passwordNeedsReHash(passwordHash)
