import { describe, expect, it } from 'vitest'
import semver from 'semver'
import { filesBelow, isCode, read } from './source-tree'

const security = read('SECURITY.md')
const lock = JSON.parse(read('package-lock.json')).packages as Record<string, { version?: string }>
const versionOf = (name: string) => lock[`node_modules/${name}`]?.version ?? ''

const advisoryTable = security.slice(security.indexOf('## Parts and their advisories'))
const rows = advisoryTable
  .split('\n')
  .filter((line) => /^\| (?!part|---)/.test(line))
  .map((line) => line.split(' | ').map((cell) => cell.replace(/^\|\s*|\s*\|$/g, '').trim()))

const sources = ['app', 'server', 'shared', 'workers']
  .flatMap(filesBelow)
  .filter(isCode)
  .map((path) => ({ path, text: read(path) }))

const using = (pattern: RegExp, rooms = /./) =>
  sources.filter(({ path, text }) => rooms.test(path) && pattern.test(text)).map(({ path }) => path)

describe('the table of advisories', () => {
  it('was reviewed within the last thirty days', () => {
    const reviewed = /^Reviewed: (\d{4}-\d{2}-\d{2})\b/m.exec(security)?.[1] ?? ''
    const days = (Date.now() - Date.parse(reviewed)) / 86_400_000
    expect(days).toBeGreaterThanOrEqual(0)
    expect(days).toBeLessThan(30)
  })

  it.each(rows.filter(([name]) => name !== 'node' && name !== 'PostgreSQL'))(
    'names the locked version of %s (%s)',
    (name, version) => {
      expect(version).toBe(versionOf(name ?? ''))
    },
  )

  it('has a row for every part that handles what people send', () => {
    const names = rows.map(([name]) => name)
    for (const part of [
      'node',
      'nuxt',
      'nitropack',
      'h3',
      'drizzle-orm',
      'nuxt-auth-utils',
      'pg',
      'pg-boss',
      'zod',
      'busboy',
      'csv-parse',
      'mathjs',
    ]) {
      expect(names).toContain(part)
    }
  })

  const proofs = rows.flatMap(([name, , , , proof = '']) =>
    proof
      .split(/; (?=`)/)
      .map((text) => /`([^`]+)`(?:: (.+))?/.exec(text))
      .filter((match) => match !== null)
      .map(([, file = '', title = '']) => ({ name, file, title })),
  )

  it.each(proofs)('$name is proved by $file', ({ file, title }) => {
    expect(read(file)).toContain(title)
  })

  it('lists proofs that exist for everything that is defended', () => {
    const named = [...security.matchAll(/`(tests\/[\w./-]+\.ts)`/g)].map((match) => match[1] ?? '')
    const present = filesBelow('tests')
    expect(named.filter((file) => !present.includes(file))).toEqual([])
  })
})

describe('the product', () => {
  it.each([
    ['nitropack', '2.13.6'],
    ['h3', '1.15.11'],
    ['drizzle-orm', '0.45.4'],
  ])('%s is at or above the mended version %s', (name, mended) => {
    expect(semver.gte(versionOf(name), mended)).toBe(true)
    expect(versionOf(name)).not.toBe('')
  })

  it('uses none of the features that the advisories are about', () => {
    const config = read('nuxt.config.ts')
    expect(config).toMatch(/ssr: false/)
    expect(config).not.toMatch(/routeRules|runtimeCompiler: true|componentIslands|\bswr\b|\bisr\b/)
    expect(
      using(
        /<NuxtIsland|\.server\.vue|defineCachedEventHandler|cachedEventHandler|defineCachedFunction|cachedFunction/,
      ),
    ).toEqual([])
    expect(filesBelow('app').filter((path) => /\.(server|island)\.vue$/.test(path))).toEqual([])
    expect(using(/navigateTo\([^)]*external/)).toEqual([])
    expect(using(/reloadNuxtApp\((?!\{ ttl: 0 \}\))/)).toEqual([])
  })

  it('navigates to fixed addresses or to what the allow-list of local paths lets through', () => {
    const wrong = sources.flatMap(({ path, text }) =>
      [...text.matchAll(/navigateTo\(\s*([^\n]*)/g)]
        .map((match) => match[1] ?? '')
        .filter((argument) => !/^(['`]\/|toLocalPath\(|\{ path: (['`]\/|address\.value))/.test(argument))
        .map((argument) => `${path}: navigateTo(${argument}`),
    )
    expect(wrong).toEqual([])
  })

  it('puts no input into identifiers or raw SQL', () => {
    expect(using(/sql\.(raw|identifier)\(/)).toEqual([])
    // Texts put together outside Drizzle may hold only names of our own.
    const assembled = sources.flatMap(({ path, text }) =>
      path.startsWith('server/')
        ? [...text.matchAll(/\.query(?:<[^>]*>)?\(\s*`([^`]*)`/g)]
            .flatMap((match) => [...(match[1] ?? '').matchAll(/\$\{([^}]+)\}/g)].map((hole) => hole[1] ?? ''))
            .filter((hole) => !['schema', 'role', 'channel', 'quote(applicationRole)'].includes(hole.trim()))
            .map((hole) => `${path}: ${hole}`)
        : [],
    )
    expect(assembled).toEqual([])
  })

  it('makes no code from text', () => {
    expect(using(/\bnew Function\(|\beval\(|v-html/)).toEqual([])
  })

  it('sends no request to a name outside', () => {
    expect(
      using(/fetch\(\s*['"`]https?:|axios|import (?!type)[^\n]*from 'node:https?'/, /^(app|server|shared|workers)/),
    ).toEqual([])
  })
})
