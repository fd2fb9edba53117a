import { createHash } from 'node:crypto'
import { existsSync } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

export interface Migration {
  tag: string
  /** Milliseconds since 1970 when it was made. The migrator skips whatever is older than its newest applied one. */
  when: number
  /** SHA-256 of the file. */
  hash: string
}

/**
 * Folder of the migrations: beside the built server's entry, or at the top of the checkout for scripts and tests, so
 * the nearest one above this module.
 */
export const findMigrations = (): string => {
  for (let folder = dirname(fileURLToPath(import.meta.url)); ; folder = dirname(folder)) {
    const candidate = join(folder, 'drizzle')
    if (existsSync(join(candidate, 'meta/_journal.json'))) return candidate
    if (folder === dirname(folder))
      throw new Error('drizzle/meta/_journal.json: expected it beside the server; found none')
  }
}

interface JournalEntry {
  idx: number
  tag: string
  when: number
}

/** The journal with the hash of each file, refused when its order would make the migrator skip one in silence. */
export const readJournal = async (folder: string = findMigrations()): Promise<Migration[]> => {
  const text = await readFile(join(folder, 'meta/_journal.json'), 'utf8')
  const { entries } = JSON.parse(text) as { entries: JournalEntry[] }
  const migrations: Migration[] = []
  for (const { tag, when } of entries) {
    const before = migrations.at(-1)
    if (before && !(when > before.when)) {
      throw new Error(
        `drizzle/meta/_journal.json: expected each migration to be newer than the one before it; found ${tag} (${when}) after ${before.tag} (${before.when}). Generate ${tag} again.`,
      )
    }
    const bytes = await readFile(join(folder, `${tag}.sql`)).catch(() => {
      throw new Error(`drizzle/${tag}.sql: named by the journal; found no such file`)
    })
    migrations.push({ tag, when, hash: createHash('sha256').update(bytes).digest('hex') })
  }
  return migrations
}

let journal: Promise<Migration[]> | undefined

/** How many migrations this build expects to be applied. */
export const countJournalMigrations = async (): Promise<number> => (await (journal ??= readJournal())).length
