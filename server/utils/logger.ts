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

export const logger = pino({
  level: process.env.LOG_LEVEL ?? 'info',
  base: { pid: process.pid },
  timestamp: () => `,"time":"${new Date().toISOString()}"`,
  formatters: { level: (label) => ({ level: label }) },
  redact: {
    paths: secretNames.flatMap((name) => [name, `*.${name}`, `*.*.${name}`, `*["set-${name}"]`]),
    censor: '[masked]',
  },
})
