import { cpSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { migrateDatabase } from '../../server/database/migrate'
import { projectRoot } from '../support/server'
import { sqlAs } from './support/database'

let name: string
let ownerUrl: string
let applicationUrl: string
let folder: string

beforeEach(async () => {
  name = `test_migrate_${randomBytes(6).toString('hex')}`
  const addresses = await createDatabase(name, { unsafeFast: true })
  ownerUrl = addresses.DATABASE_OWNER_URL
  applicationUrl = addresses.DATABASE_URL
  folder = mkdtempSync(join(tmpdir(), 'linewright-drizzle-'))
  cpSync(join(projectRoot, 'drizzle'), folder, { recursive: true })
})

afterEach(async () => {
  await dropDatabase(name)
  rmSync(folder, { recursive: true, force: true })
})

const migrate = () => migrateDatabase(ownerUrl, 'linewright', { folder })

interface Journal {
  entries: { idx: number; when: number; tag: string; breakpoints: boolean; version: string }[]
}
const journalPath = () => join(folder, 'meta/_journal.json')
const readJournal = () => JSON.parse(readFileSync(journalPath(), 'utf8')) as Journal
const writeJournal = (journal: Journal) => writeFileSync(journalPath(), JSON.stringify(journal))

const addMigration = (tag: string, text: string, when: (newest: number) => number) => {
  const journal = readJournal()
  const newest = journal.entries.at(-1)?.when ?? 0
  journal.entries.push({ idx: journal.entries.length, when: when(newest), tag, breakpoints: true, version: '7' })
  writeFileSync(join(folder, `${tag}.sql`), text)
  writeJournal(journal)
}

describe('migrating', () => {
  it('applies each migration once when twenty processes start at the same moment', async () => {
    const total = readJournal().entries.length
    const first = await Promise.all(Array.from({ length: 20 }, migrate))
    expect(first.map(({ applied }) => applied).sort((a, b) => b - a)).toEqual([total, ...Array<number>(19).fill(0)])
    // On a database in use, a change of data must not happen twice either.
    await sqlAs(ownerUrl, `insert into users (email, name, password_hash) values ('a@b.example', 'Once', 'x')`)
    addMigration('9000_data', `update users set name = name || '!';`, (newest) => newest + 1)
    const second = await Promise.all(Array.from({ length: 20 }, migrate))
    expect(second.filter(({ applied }) => applied === 1)).toHaveLength(1)
    expect(await sqlAs(ownerUrl, 'select name from users')).toEqual([{ name: 'Once!' }])
  })

  it('leaves nothing of a migration that fails, and goes on when it is mended', async () => {
    await migrate()
    addMigration(
      '9000_broken',
      'create table half (id int);--> statement-breakpoint\nselect 1/0;',
      (newest) => newest + 1,
    )
    await expect(migrate()).rejects.toThrow(/division by zero|Failed query/)
    expect(await sqlAs(ownerUrl, `select to_regclass('half')::text as half`)).toEqual([{ half: null }])
    writeFileSync(join(folder, '9000_broken.sql'), 'create table half (id int);')
    expect((await migrate()).applied).toBe(1)
  })

  it('refuses a journal in which a migration is older than the one before, which would be skipped in silence', async () => {
    await migrate()
    addMigration('9000_late', 'create table late (id int);', (newest) => newest - 1)
    await expect(migrate()).rejects.toThrow(/expected each migration to be newer .* found 9000_late/)
  })

  it('refuses a migration that was edited after it was applied', async () => {
    await migrate()
    const tag = readJournal().entries[0]?.tag
    const path = join(folder, `${tag}.sql`)
    writeFileSync(path, `${readFileSync(path, 'utf8')}\n-- a later thought`)
    await expect(migrate()).rejects.toThrow(new RegExp(`expected migration 1 to be ${tag}`))
  })

  it('refuses a database of a newer version', async () => {
    addMigration('9000_future', 'create table future (id int);', (newest) => newest + 1)
    await migrate()
    const journal = readJournal()
    journal.entries.pop()
    writeJournal(journal)
    await expect(migrate()).rejects.toThrow(/It belongs to a newer version/)
  })

  it('refuses a journal that names a file which is not there', async () => {
    addMigration('9000_lost', '', (newest) => newest + 1)
    rmSync(join(folder, '9000_lost.sql'))
    await expect(migrate()).rejects.toThrow(/drizzle\/9000_lost.sql: named by the journal/)
  })

  it('lets the application role work and nothing else', async () => {
    await migrate()
    const grants = await sqlAs<{ kind: string }>(
      applicationUrl,
      `select distinct privilege_type as kind from information_schema.role_table_grants
       where grantee = 'linewright' and table_schema = 'public' order by 1`,
    )
    expect(grants.map(({ kind }) => kind)).toEqual(['DELETE', 'INSERT', 'SELECT', 'UPDATE'])
    await expect(sqlAs(applicationUrl, 'truncate users cascade')).rejects.toThrow(/permission denied/)
  })
})
