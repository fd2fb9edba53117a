import type { IncomingHttpHeaders } from 'node:http'
import { isIPv4, isIPv6 } from 'node:net'

const plain = (address: string): string => address.trim().replace(/^::ffff:(?=\d+\.)/i, '')

/** The four leading groups of an IPv6 address: what one subscriber is given. */
const prefixOf = (address: string): string => {
  const [head = '', tail] = address.replace(/%.*$/, '').toLowerCase().split('::')
  const left = head === '' ? [] : head.split(':')
  const right = tail ? tail.split(':') : []
  const groups =
    tail === undefined ? left : [...left, ...Array<string>(8 - left.length - right.length).fill('0'), ...right]
  return `${groups
    .slice(0, 4)
    .map((group) => Number.parseInt(group, 16).toString(16))
    .join(':')}::/64`
}

/**
 * Address that attempts are counted by. The socket's own, unless the operator named proxies: each of them appends the
 * address it saw, so with n proxies the n-th entry from the right is the client; what stands left of it was written by
 * the client and means nothing.
 */
export const clientAddressOf = (
  socketAddress: string | undefined,
  headers: IncomingHttpHeaders,
  trustedProxies: number,
): string => {
  const forwarded = String(headers['x-forwarded-for'] ?? '')
    .split(',')
    .map(plain)
    .filter(Boolean)
  const named = trustedProxies > 0 ? forwarded.at(-trustedProxies) : undefined
  const address = named && (isIPv4(named) || isIPv6(named)) ? named : plain(socketAddress ?? '')
  return isIPv6(address) ? prefixOf(address) : address || 'unknown'
}
