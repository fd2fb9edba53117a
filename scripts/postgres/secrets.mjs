import { randomBytes } from 'node:crypto'
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { dirname } from 'node:path'

/** Reads a secret kept in a file of mode 600, or makes it: 32 random bytes in URL-safe letters. */
export const keepSecret = (file) => {
  if (existsSync(file)) {
    const kept = readFileSync(file, 'utf8').trim()
    if (kept.length >= 32) return kept
    throw new Error(`${file} holds ${kept.length} characters; expected a secret of at least 32`)
  }
  // Only the folder of secrets is closed to others: the one above may hold the cluster, which another account enters.
  mkdirSync(dirname(dirname(file)), { recursive: true })
  mkdirSync(dirname(file), { recursive: true, mode: 0o700 })
  const made = randomBytes(32).toString('base64url')
  writeFileSync(file, `${made}\n`, { mode: 0o600, flag: 'wx' })
  return made
}
