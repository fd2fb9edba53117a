const networkCodes = new Set(['ECONNREFUSED', 'ECONNRESET', 'ETIMEDOUT', 'EPIPE', 'ENOTFOUND', 'EHOSTUNREACH'])

const clientTexts =
  /timeout exceeded when trying to connect|Connection terminated|Query read timeout|Client has encountered a connection error/

/** PostgreSQL out of reach, shutting down, out of connections or over a time limit (classes 08, 53, 57). */
export const isDatabaseDown = (error: unknown): boolean => {
  for (let link = error, depth = 0; link instanceof Error && depth < 5; link = link.cause, depth++) {
    const code = 'code' in link ? String(link.code) : ''
    if (networkCodes.has(code) || /^(08|53|57)[0-9A-Z]{3}$/.test(code)) return true
    if (clientTexts.test(link.message)) return true
    if (link instanceof AggregateError && link.errors.some((part) => isDatabaseDown(part))) return true
  }
  return false
}

/** The code of PostgreSQL or of the network, wherever in the chain of causes it is. */
export const databaseCodeOf = (error: unknown): string | undefined => {
  for (let link = error, depth = 0; link instanceof Error && depth < 5; link = link.cause, depth++) {
    if ('code' in link && typeof link.code === 'string') return link.code
  }
  return undefined
}
