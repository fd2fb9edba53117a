import { spawnSync } from 'node:child_process'
import { cpSync, mkdirSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { join, relative } from 'node:path'
import { afterAll, describe, expect, it } from 'vitest'
import { filesBelow, read, root } from './source-tree'

interface Journal {
  entries: { idx: number; when: number; tag: string }[]
}

const { entries } = JSON.parse(read('drizzle/meta/_journal.json')) as Journal

describe('migrations', () => {
  // drizzle-kit takes its output folder from the working directory only, so the copy lies inside the checkout.
  const cache = join(root, 'node_modules/.cache/linewright')
  mkdirSync(cache, { recursive: true })
  const copy = mkdtempSync(join(cache, 'migrations-'))
  afterAll(() => rmSync(copy, { recursive: true, force: true }))

  it('are numbered without a gap and rise in time', () => {
    expect(entries.map(({ idx }) => idx)).toEqual(entries.map((_entry, index) => index))
    const times = entries.map(({ when }) => when)
    expect(times).toEqual([...times].sort((a, b) => a - b))
    expect(new Set(times).size).toBe(times.length)
  })

  it('are exactly the files that the journal names', () => {
    const files = filesBelow('drizzle').filter((path) => path.endsWith('.sql'))
    expect(files).toEqual(entries.map(({ tag }) => `drizzle/${tag}.sql`).sort())
  })

  it('match the schema: generating again gives nothing', () => {
    cpSync(join(root, 'drizzle'), join(copy, 'drizzle'), { recursive: true })
    const config = join(copy, 'drizzle.config.json')
    const schema = './server/database/schema/index.ts'
    const out = `./${relative(root, join(copy, 'drizzle'))}`
    writeFileSync(config, JSON.stringify({ dialect: 'postgresql', schema, out }))
    const before = readdirSync(join(copy, 'drizzle'))
    const made = spawnSync(join(root, 'node_modules/.bin/drizzle-kit'), ['generate', '--config', config], {
      cwd: root,
      encoding: 'utf8',
      input: '',
    })
    expect(made.stdout + made.stderr).toContain('No schema changes')
    expect(readdirSync(join(copy, 'drizzle'))).toEqual(before)
  })

  /** Hold ids only and are read across groups: who belongs where, whose turn it is, which attempt is alive. */
  const outsideTheFence = ['memberships', 'run_attempts', 'queue_turns']

  it('put every table of a group behind forced row level security', () => {
    const sql = entries.map(({ tag }) => read(`drizzle/${tag}.sql`)).join('\n')
    const ofGroups = [...sql.matchAll(/CREATE TABLE "(\w+)" \(([\s\S]*?)\n\);/g)]
      .filter(([, name = '', columns = '']) => columns.includes('"group_id"') && !outsideTheFence.includes(name))
      .map(([, name]) => name)
    expect(ofGroups.length).toBeGreaterThan(5)
    for (const name of ofGroups) {
      expect(sql).toContain(`ALTER TABLE "${name}" ENABLE ROW LEVEL SECURITY`)
      expect(sql).toContain(`ALTER TABLE "${name}" FORCE ROW LEVEL SECURITY`)
    }
  })
})
