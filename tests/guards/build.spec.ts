import { existsSync, readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, it } from 'vitest'
import { demoPeople, demoSets } from '../../scripts/demo/scenario'
import { root } from './source-tree'

const output = join(root, '.output')

const walk = (folder: string): string[] =>
  readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name)
    return entry.isDirectory() ? walk(path) : [path]
  })

/**
 * Names in the pages' code that no request goes to: namespaces, and pages that messages of packages point to. What is
 * really requested is watched in the browser tests.
 */
const harmless = [
  ...['www.w3.org', 'vuejs.org', 'pinia.vuejs.org', 'router.vuejs.org', 'nuxt.com', 'github.com', 'json-schema.org'],
  ...['developer.mozilla.org', 'echarts.apache.org', 'mathjs.org', 'bugs.chromium.org', 'stackoverflow.com'],
  ...['reka-ui.com', 'www.reka-ui.com', 'www.wikipedia.org', 'en.wikipedia.org', 'tools.ietf.org', 'doi.org'],
]

describe('the built application', () => {
  let files: string[] = []
  beforeAll(() => {
    if (!existsSync(join(output, 'server/index.mjs')))
      throw new Error('no build in .output; run `npm test -- guards` or `npm run build`')
    files = walk(output)
  })

  const own = () =>
    files.filter((path) => !path.includes('/server/node_modules/') && /\.(m?js|css|html|json)$/.test(path))
  const client = () => own().filter((path) => path.startsWith(join(output, 'public')))

  it('has everything it needs beside its entry', () => {
    const names = files.map((path) => path.slice(output.length + 1))
    expect(names).toContain('server/index.mjs')
    expect(names).toContain('server/workers/simulate.mjs')
    expect(names).toContain('server/workers/queue.mjs')
    expect(names.some((name) => /^server\/drizzle\/0000_.*\.sql$/.test(name))).toBe(true)
  })

  it('names no host outside in the code of its pages', () => {
    const found = client().flatMap((path) =>
      [...readFileSync(path, 'utf8').matchAll(/\bhttps?:\/\/([a-z0-9.-]+\.[a-z]{2,})/gi)]
        .map((match) => match[1]?.toLowerCase() ?? '')
        .filter((host) => !harmless.includes(host))
        .map((host) => `${path.slice(output.length)}: ${host}`),
    )
    expect([...new Set(found)]).toEqual([])
  })

  it('loads styles and fonts from itself only', () => {
    const sheets = client().filter((path) => path.endsWith('.css'))
    expect(sheets.length).toBeGreaterThan(0)
    const remote = sheets.filter((path) => /@import|url\(["']?(https?:)?\/\//.test(readFileSync(path, 'utf8')))
    expect(remote).toEqual([])
    expect(files.some((path) => /SourceSans3|source-sans-3/.test(path))).toBe(true)
  })

  it('holds nothing of the demo', () => {
    const words = [...demoPeople.flatMap(({ email, name }) => [email, name]), ...demoSets.map(({ name }) => name)]
    expect(words.length).toBeGreaterThan(5)
    const found = own().flatMap((path) => {
      const text = readFileSync(path, 'utf8')
      return words.filter((word) => text.includes(word)).map((word) => `${path.slice(output.length)}: ${word}`)
    })
    expect(found).toEqual([])
  })

  it('has no source maps', () => {
    expect(files.filter((path) => path.endsWith('.map') && !path.includes('/node_modules/'))).toEqual([])
    expect(own().filter((path) => /^\/\/# sourceMappingURL=/m.test(readFileSync(path, 'utf8')))).toEqual([])
  })

  it('bears no path of the machine that built it', () => {
    const found = client().filter((path) => readFileSync(path, 'utf8').includes(root))
    expect(found).toEqual([])
  })
})
