import { defineNitroPlugin, useRuntimeConfig } from 'nitropack/runtime'

const shortestSecret = 32

/** What the server cannot do without, said at the start and not with the first visitor. */
export default defineNitroPlugin(() => {
  if (import.meta.dev) return
  const { session, baseUrl, trustedProxies } = useRuntimeConfig()
  const problems: string[] = []
  const length = Buffer.byteLength(String(session.password))
  if (length < shortestSecret) {
    problems.push(`NUXT_SESSION_PASSWORD: expected at least ${shortestSecret} random bytes; found ${length}`)
  }
  if (!process.env.DATABASE_URL) problems.push('DATABASE_URL: expected postgres://...; found nothing')
  if (!URL.canParse(baseUrl)) problems.push(`NUXT_BASE_URL: expected an address; found "${baseUrl}"`)
  if (!Number.isInteger(Number(trustedProxies)) || Number(trustedProxies) < 0) {
    problems.push(`NUXT_TRUSTED_PROXIES: expected a whole number from 0; found "${trustedProxies}"`)
  }
  if (problems.length > 0) throw new Error(`The server cannot start:\n${problems.join('\n')}`)
})
