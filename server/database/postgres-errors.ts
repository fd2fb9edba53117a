import { databaseCodeOf } from './outage'

/** A value that must be unique is there already. */
export const isUniqueViolation = (error: unknown): boolean => databaseCodeOf(error) === '23505'

/** Another row points at this one, or the row pointed at is gone. */
export const isReferenceViolation = (error: unknown): boolean => databaseCodeOf(error) === '23503'
