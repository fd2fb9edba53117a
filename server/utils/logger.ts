import { pino } from 'pino'

/**
 * JSON-line log on standard output. JSON strings escape CR and LF, so no value can forge a line. Secrets are masked by
 * name wherever an object is logged; nobody logs bodies, cookies or query strings on purpose.
 */
const secretNames = [
  'password',
  'currentPassword',
  'newPassword',
  'passwordHash',
  'token',
  'tokenHash',
  'cookie',
  'authorization',
]

/**
 * What a log keeps of an error. Messages of the database layer end in the values of the statement, and the driver's
 * errors carry rows: both may hold what people typed, so only named fields are taken and the values are cut off.
 */
const toLoggedError = (error: unknown, depth = 0): unknown => {
  if (!(error instanceof Error)) return { type: typeof error }
  const cut = (text: string | undefined) => text?.replace(/\nparams: [^]*?(?=\n {4}at |$)/, '').slice(0, 4000)
  return {
    type: error.name,
    message: cut(error.message),
    code: 'code' in error ? error.code : undefined,
    stack: cut(error.stack),
    cause: error.cause && depth < 3 ? toLoggedError(error.cause, depth + 1) : undefined,
  }
}

export const logger = pino({
  level: process.env.LOG_LEVEL ?? 'info',
  base: { pid: process.pid },
  timestamp: () => `,"time":"${new Date().toISOString()}"`,
  serializers: { err: toLoggedError },
  formatters: { level: (label) => ({ level: label }) },
  redact: {
    paths: secretNames.flatMap((name) => [name, `*.${name}`, `*.*.${name}`, `*["set-${name}"]`]),
    censor: '[masked]',
  },
})
