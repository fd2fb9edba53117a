import { randomUUID } from 'node:crypto'
import type { H3Event, SessionConfig } from 'h3'
import { deleteCookie, getCookie, unsealSession } from 'h3'
import { setUserSession, useRuntimeConfig } from '#imports'

/**
 * The session cookie carries one sealed random token and nothing else; the row in PostgreSQL decides. Reading never
 * writes a cookie, so anonymous visitors get none.
 */
const readConfig = (event: H3Event): SessionConfig & { name: string } => {
  const config = useRuntimeConfig(event).session as SessionConfig & { cookie: { secure: boolean } }
  // Browsers keep the __Host- promise (this host alone, over a safe channel) only for Secure cookies.
  return { ...config, name: config.cookie.secure ? '__Host-linewright' : 'linewright', sessionHeader: false }
}

/** The password in force, then the one before it, so that a change of secrets signs nobody out. */
const passwords = (event: H3Event, current: string): string[] =>
  [current, useRuntimeConfig(event).sessionPreviousPassword].filter((password) => password.length > 0)

export const readSessionToken = async (event: H3Event): Promise<string | null> => {
  const config = readConfig(event)
  const sealed = getCookie(event, config.name)
  if (!sealed) return null
  for (const password of passwords(event, config.password)) {
    try {
      const session = await unsealSession(event, { ...config, password }, sealed)
      const secure: unknown = session.data?.secure
      const token = typeof secure === 'object' && secure !== null && 'token' in secure ? secure.token : null
      if (typeof token === 'string') return token
    } catch {
      // Not sealed with this password, altered, or past its time: the same as no cookie.
    }
  }
  return null
}

export const hasSessionCookie = (event: H3Event): boolean => getCookie(event, readConfig(event).name) !== undefined

/** Starts from an empty session, so that neither the id nor any data of an earlier cookie is carried over. */
export const writeSessionToken = async (event: H3Event, token: string): Promise<void> => {
  const config = readConfig(event)
  event.context.sessions = {
    ...event.context.sessions,
    [config.name]: { id: randomUUID(), createdAt: Date.now(), data: Object.create(null) },
  }
  await setUserSession(event, { secure: { token } }, config)
}

export const dropSessionCookie = (event: H3Event): void => {
  const { name, cookie } = readConfig(event)
  Reflect.deleteProperty(event.context.sessions ?? {}, name)
  deleteCookie(event, name, cookie || undefined)
}
