import { sha256 } from '@noble/hashes/sha2.js'
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js'
import canonicalize from 'canonicalize'

/**
 * Canonical JSON text (RFC 8785: sorted keys, shortest numbers, -0 written 0). Two equal values always give the same
 * text, whatever the order of their keys, so its hash can name them.
 */
export const toCanonicalJson = (value: unknown): string => {
  const text = canonicalize(value)
  if (text === undefined) throw new TypeError('expected a JSON value; found undefined')
  return text
}

/** SHA-256 of text or bytes, lower-case hexadecimal. Works without a secure context, unlike crypto.subtle. */
export const hashOf = (data: string | Uint8Array): string =>
  bytesToHex(sha256(typeof data === 'string' ? utf8ToBytes(data) : data))

/** The name of a value by its content: SHA-256 of its canonical JSON. */
export const contentHash = (value: unknown): string => hashOf(toCanonicalJson(value))

/** The bytes of a downloaded JSON file: canonical key order, two-space indent, final newline. */
export const toJsonFile = (value: unknown): string => `${JSON.stringify(JSON.parse(toCanonicalJson(value)), null, 2)}\n`
