import { createHmac, randomBytes, timingSafeEqual } from 'node:crypto'
import type { H3Event } from 'h3'
import { getCookie, setCookie } from 'h3'
import { useRuntimeConfig } from 'nitropack/runtime'
import { hashOf } from '../../shared/utils/canonical'

/**
 * Marks a browser in which someone once signed in to this account. Guesses from elsewhere can slow the account down for
 * strangers, but a marked browser is counted by itself, so its owner still gets in. Proves nothing else.
 */
const lifetimeSeconds = 180 * 24 * 3600

const settings = (event: H3Event) => {
  const { session, sessionPreviousPassword } = useRuntimeConfig(event)
  const secure = (session.cookie as { secure: boolean }).secure
  return {
    name: secure ? '__Host-linewright-device' : 'linewright-device',
    secure,
    keys: [session.password, sessionPreviousPassword].filter((key) => key.length > 0),
  }
}

const sign = (key: string, email: string, mark: string): Buffer =>
  createHmac('sha256', key).update(`device\n${mark}\n${email}`).digest()

/** Name under which this browser's attempts on the account are counted; null when it is not a marked one. */
export const readDeviceMark = (event: H3Event, email: string): string | null => {
  const { name, keys } = settings(event)
  const [mark, signature] = (getCookie(event, name) ?? '').split('.')
  if (!mark || !signature) return null
  const given = Buffer.from(signature, 'base64url')
  const known = keys.some((key) => {
    const expected = sign(key, email, mark)
    return given.length === expected.length && timingSafeEqual(given, expected)
  })
  return known ? hashOf(mark) : null
}

export const writeDeviceMark = (event: H3Event, email: string): void => {
  const { name, keys, secure } = settings(event)
  const key = keys[0]
  if (!key) return
  const mark = randomBytes(16).toString('base64url')
  const options = { httpOnly: true, sameSite: 'lax', path: '/', secure, maxAge: lifetimeSeconds } as const
  setCookie(event, name, `${mark}.${sign(key, email, mark).toString('base64url')}`, options)
}
