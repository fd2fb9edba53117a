import { randomBytes } from 'node:crypto'
import type { H3Event } from 'h3'

export const cspNonceOf = (event: H3Event): string => (event.context.cspNonce ??= randomBytes(18).toString('base64'))

const isApi = (event: H3Event): boolean => /^\/+api(?:[/?]|$)/i.test(event.path)

/** Answers of the API are data: whatever a browser is made to do with one, it runs nothing and loads nothing. */
const apiPolicy = "default-src 'none'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'; sandbox"

/**
 * One policy for the shell, the scripts and the threads of the page (a thread obeys the policy of its own script's
 * answer). `wasm-unsafe-eval` admits compiled kernels and nothing else; style attributes are needed by the figures'
 * tooltips, style elements and sheets only come from here or carry the nonce.
 */
const pagePolicy = (nonce: string): string =>
  [
    "default-src 'none'",
    `script-src 'nonce-${nonce}' 'strict-dynamic' 'wasm-unsafe-eval'`,
    `style-src 'self' 'nonce-${nonce}'`,
    `style-src-elem 'self' 'nonce-${nonce}'`,
    "style-src-attr 'unsafe-inline'",
    "img-src 'self' data: blob:",
    "font-src 'self'",
    "connect-src 'self'",
    "worker-src 'self'",
    "manifest-src 'self'",
    "object-src 'none'",
    "base-uri 'none'",
    "frame-ancestors 'none'",
    "form-action 'self'",
  ].join('; ')

/** The development server injects scripts, evaluates modules and reloads over a socket. It serves one person. */
const developmentPolicy =
  "default-src 'self' 'unsafe-inline' 'unsafe-eval' data: blob:; connect-src 'self' ws: wss:; frame-ancestors 'none'"

const common: readonly [string, string][] = [
  ['x-content-type-options', 'nosniff'],
  ['x-frame-options', 'DENY'],
  ['referrer-policy', 'no-referrer'],
  ['cross-origin-opener-policy', 'same-origin'],
  ['cross-origin-resource-policy', 'same-origin'],
  ['cross-origin-embedder-policy', 'require-corp'],
  ['origin-agent-cluster', '?1'],
  ['x-dns-prefetch-control', 'off'],
  ['x-permitted-cross-domain-policies', 'none'],
  [
    'permissions-policy',
    'accelerometer=(), autoplay=(), camera=(), display-capture=(), geolocation=(), gyroscope=(), magnetometer=(), microphone=(), midi=(), payment=(), usb=()',
  ],
]

const yearOfSeconds = 365 * 24 * 3600

export const securityHeaders = (event: H3Event, baseUrl: string): [string, string][] => {
  const headers = [...common]
  const policy = import.meta.dev ? developmentPolicy : pagePolicy(cspNonceOf(event))
  headers.push(['content-security-policy', isApi(event) ? apiPolicy : policy])
  if (isApi(event)) headers.push(['cache-control', 'no-store'])
  if (!import.meta.dev && baseUrl.startsWith('https:')) {
    headers.push(['strict-transport-security', `max-age=${2 * yearOfSeconds}; includeSubDomains`])
  }
  return headers
}
