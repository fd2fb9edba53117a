import type { Issue } from '#shared/errors/app-error'

/** A refused or failed request: the server's problem document as a typed error. */
export class ApiError extends Error {
  readonly status: number
  /** Code of shared/errors/codes.ts, or `network/unreachable` when no answer came. */
  readonly code: string
  readonly detail: string
  readonly issues: Issue[]
  readonly requestId: string

  constructor(
    problem: { status: number; code: string; detail: string; issues?: Issue[]; requestId?: string },
    options?: ErrorOptions,
  ) {
    super(problem.detail, options)
    this.name = 'ApiError'
    this.status = problem.status
    this.code = problem.code
    this.detail = problem.detail
    this.issues = problem.issues ?? []
    this.requestId = problem.requestId ?? ''
  }
}

/** What the server answers to values that its schema refuses. */
export const invalidInput = (issues: readonly { path: PropertyKey[]; message: string }[]): ApiError =>
  new ApiError({
    status: 422,
    code: 'input/invalid',
    detail: 'Some values are not valid.',
    issues: issues.map(({ path, message }) => ({
      path: path.map((key) => (typeof key === 'number' ? key : String(key))),
      message,
    })),
  })

/** Path of a value as people read it: `bath[0].exponent`. */
export const formatPath = (path: readonly PropertyKey[]): string =>
  path.reduce<string>(
    (text, key) => (typeof key === 'number' ? `${text}[${key}]` : text ? `${text}.${String(key)}` : String(key)),
    '',
  )

/** The first complaint about exactly this path, or an empty text. */
export const issueAt = (
  issues: readonly { path: readonly PropertyKey[]; message: string }[],
  path: readonly PropertyKey[] | string,
) => {
  const wanted = typeof path === 'string' ? path : formatPath(path)
  return issues.find((issue) => formatPath(issue.path) === wanted)?.message ?? ''
}

/** One sentence for people from any failure. */
export const messageOf = (error: unknown): string => {
  if (error instanceof ApiError) {
    return error.status >= 500 && error.requestId ? `${error.detail} Request ${error.requestId}.` : error.detail
  }
  return error instanceof Error ? error.message : 'Something went wrong.'
}
