import { errorCodes, type ErrorCode } from './codes'

/** One wrong place in an input: where it is, and a sentence saying what was found and what is expected. */
export interface Issue {
  /** Keys and indices from the root of the body, the query or the file. */
  path: (string | number)[]
  message: string
}

/**
 * The one error that services throw on purpose. The HTTP edge turns it into a problem document; a job handler into a
 * stored reason. `detail` is shown to people, so it never holds secrets or SQL.
 */
export class AppError extends Error {
  readonly code: ErrorCode
  readonly detail: string
  readonly issues: Issue[]
  /** Sent as Retry-After where waiting helps. */
  readonly retryAfterSeconds: number | undefined

  constructor(
    code: ErrorCode,
    options: { detail?: string; issues?: Issue[]; retryAfterSeconds?: number; cause?: unknown } = {},
  ) {
    super(`${code}: ${options.detail ?? errorCodes[code].title}`, { cause: options.cause })
    this.name = 'AppError'
    this.code = code
    this.detail = options.detail ?? errorCodes[code].title
    this.issues = options.issues ?? []
    this.retryAfterSeconds = options.retryAfterSeconds
  }

  get status(): number {
    return errorCodes[this.code].status
  }
}
