import type { IncomingHttpHeaders } from 'node:http'
import { AppError } from '../../shared/errors/app-error'

const loopbackNames = ['127.0.0.1', 'localhost', '[::1]']

/** Origins under which this site is open: the configured one; on loopback also the host's other names. */
export const ownOrigins = (baseUrl: string): string[] => {
  const url = new URL(baseUrl)
  if (!loopbackNames.includes(url.hostname)) return [url.origin]
  const port = url.port ? `:${url.port}` : ''
  return loopbackNames.map((name) => `${url.protocol}//${name}${port}`)
}

/**
 * Unsafe requests must come from our own pages. Browsers say so themselves in Sec-Fetch-Site; where they do not (plain
 * http on a network name) the Origin must be exactly ours. Neither header means no browser page of ours.
 */
export const requireSameOrigin = (headers: IncomingHttpHeaders, baseUrl: string): void => {
  const site = headers['sec-fetch-site']
  if (site !== undefined) {
    if (site === 'same-origin') return
    throw new AppError('request/cross-site')
  }
  if (headers.origin !== undefined && ownOrigins(baseUrl).includes(headers.origin)) return
  throw new AppError('request/cross-site')
}
