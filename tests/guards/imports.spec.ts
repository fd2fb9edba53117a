import { describe, expect, it } from 'vitest'
import { allImports, packageOf, type ImportEdge } from './source-tree'

const edges = allImports()

const inside = (path: string | null, folder: string) =>
  path !== null && (path === folder || path.startsWith(`${folder}/`))

const room = (path: string) => path.split('/')[0] ?? ''

const show = ({ from, specifier, typeOnly }: ImportEdge) => `${from} -> ${specifier}${typeOnly ? ' (type)' : ''}`

/** Which rooms a room may import at run time; types may cross more edges where `typesToo` says so. */
const table: Record<string, { rooms: string[]; typesToo?: string[] }> = {
  app: { rooms: ['app', 'shared'] },
  server: { rooms: ['server', 'shared'], typesToo: ['workers'] },
  workers: { rooms: ['workers', 'shared'] },
  shared: { rooms: ['shared'] },
}

describe('who may import whom', () => {
  it.each(Object.keys(table))('%s keeps to its rooms', (name) => {
    const { rooms, typesToo = [] } = table[name] ?? { rooms: [] }
    const wrong = edges.filter(({ from, to, typeOnly }) => {
      if (room(from) !== name || to === null) return false
      // The kernel is compiled from shared/engine/kernel into a folder that git ignores.
      if (from === 'shared/engine/kernel/load-kernel.ts' && inside(to, '.kernel')) return false
      return !rooms.includes(room(to)) && !(typeOnly && typesToo.includes(room(to)))
    })
    expect(wrong.map(show)).toEqual([])
  })

  it('finds the edges it judges', () => {
    for (const name of Object.keys(table)) {
      expect(edges.filter(({ from, to }) => room(from) === name && to !== null).length).toBeGreaterThan(1)
    }
  })

  it('lets nothing of the product import scripts or tests', () => {
    const wrong = edges.filter(
      ({ from, to }) =>
        !['scripts', 'tests'].includes(room(from)) && to !== null && ['scripts', 'tests'].includes(room(to)),
    )
    expect(wrong.map(show)).toEqual([])
  })
})

describe('shared/', () => {
  const shared = edges.filter(({ from }) => room(from) === 'shared')

  it('stays free of Node, the page and every framework', () => {
    const forbidden = /^(node:|vue$|vue-|pinia|nuxt|#imports|#app|h3$|nitropack|pg$|pg-|drizzle|piscina|@vue|@nuxt)/
    expect(shared.filter(({ specifier }) => forbidden.test(specifier)).map(show)).toEqual([])
  })

  it('keeps the engine to itself, to what is shared by all, and to the types of schemas and errors', () => {
    /** Numeric packages: complex.js is the arithmetic where clarity counts, mathjs parses typed formulas. */
    const numeric: Record<string, RegExp> = {
      'complex.js': /^shared\/engine\/(oracle|self-check|complex-functions|sphere\/.*)\.ts$/,
      mathjs: /^shared\/engine\/bath\/(formula|expression)\.ts$/,
    }
    const wrong = shared.filter(({ from, to, specifier, typeOnly }) => {
      if (!inside(from, 'shared/engine')) return false
      if (to === null) return !numeric[packageOf(specifier) ?? specifier]?.test(from)
      if (inside(to, 'shared/engine') || inside(to, '.kernel')) return false
      if (to === 'shared/utils/limits' || to === 'shared/utils/canonical') return false
      return !(typeOnly && (inside(to, 'shared/schemas') || inside(to, 'shared/errors')))
    })
    expect(wrong.map(show)).toEqual([])
  })

  it('keeps the schemas to shared/', () => {
    const wrong = shared.filter(
      ({ from, to, specifier }) => inside(from, 'shared/schemas') && to === null && packageOf(specifier) !== 'zod',
    )
    expect(wrong.map(show)).toEqual([])
  })
})

describe('inside server/', () => {
  const server = edges.filter(({ from }) => room(from) === 'server')

  /** May the folder on the left import the one on the right? What is not listed is refused. */
  const layers: Record<string, string[]> = {
    'server/api': ['server/services', 'server/utils', 'server/api'],
    'server/routes': ['server/services', 'server/utils', 'server/routes'],
    'server/middleware': ['server/services', 'server/utils'],
    // What a lost database looks like to the driver is the database room's knowledge; the edge turns it into 503.
    'server/utils': ['server/services', 'server/utils', 'server/database/outage'],
    'server/services': [
      ...['server/services', 'server/database', 'server/jobs', 'server/storage', 'server/mail'],
      ...['server/utils/logger', 'server/utils/shutdown'],
    ],
    'server/jobs': [
      'server/jobs',
      'server/services',
      'server/database',
      'server/utils/logger',
      'server/utils/shutdown',
    ],
    'server/database': ['server/database', 'server/utils/logger'],
    'server/storage': ['server/storage', 'server/utils/logger'],
    'server/mail': ['server/mail', 'server/utils/logger'],
  }

  it.each(Object.keys(layers))('%s imports downwards only', (layer) => {
    const wrong = server.filter(({ from, to }) => {
      if (!inside(from, layer) || !inside(to, 'server')) return false
      return !(layers[layer] ?? []).some((allowed) => inside(to, allowed))
    })
    expect(wrong.map(show)).toEqual([])
  })

  it('lets only repositories and the database room know the tables', () => {
    const wrong = edges.filter(
      ({ from, to, typeOnly }) =>
        inside(to, 'server/database/schema') &&
        !typeOnly &&
        !inside(from, 'server/database') &&
        room(from) !== 'tests' &&
        room(from) !== 'scripts',
    )
    expect(wrong.map(show)).toEqual([])
  })

  it('lets routes reach tables through services only', () => {
    const wrong = server.filter(({ from, to }) => inside(from, 'server/api') && inside(to, 'server/database'))
    expect(wrong.map(show)).toEqual([])
  })

  it.each([
    ['piscina', ['server/jobs', 'workers']],
    ['pg-boss', ['server/jobs']],
    ['pg', ['server/database', 'server/jobs']],
    ['drizzle-orm', ['server/database']],
    ['unstorage', ['server/storage']],
    ['h3', ['server/api', 'server/middleware', 'server/plugins', 'server/utils', 'server/error-handler.ts']],
  ])('%s is known to its own rooms only', (name, folders) => {
    const wrong = edges.filter(
      ({ from, specifier, typeOnly }) =>
        packageOf(specifier) === name &&
        !typeOnly &&
        !['tests', 'scripts'].includes(room(from)) &&
        !folders.some((folder) => inside(from, folder)),
    )
    expect(wrong.map(show)).toEqual([])
  })
})
