import { describe, expect, it } from 'vitest'
import { z } from 'zod'
import { jobNames, jobs } from '../../server/jobs/registry'
import { pages } from '../browser/pages'
import { policy } from '../api/policy'
import { filesBelow, importsOf, isCode, read } from './source-tree'

describe('every route', () => {
  const routes = filesBelow('server/api').filter((path) => path.endsWith('.ts'))
  // Answers 404 and 405 for what no other file answers.
  const named = routes.filter((path) => path !== 'server/api/[...path].ts')

  it.each(routes)('%s is made by a wrapper that settles who may call it', (path) => {
    expect(read(path)).toMatch(/export default define(Group|Account|Public)Route\(/)
  })

  it.each(named)('%s has a row in the role matrix', (path) => {
    expect(Object.keys(policy)).toContain(path.slice('server/api/'.length))
  })

  it('is a few lines: what it decides is decided in a service', () => {
    const long = routes
      .map((path) => ({ path, lines: read(path).split('\n').length }))
      .filter(({ lines }) => lines > 80)
    expect(long).toEqual([])
  })
})

describe('every job', () => {
  it.each(jobNames)('%s has a schema and a handler', (name) => {
    expect(jobs[name].payload).toBeInstanceOf(z.ZodType)
    expect(read('server/jobs/consume.ts')).toContain(`${name}: make`)
  })

  it('carries ids only', () => {
    for (const name of jobNames) {
      expect(Object.keys(jobs[name].payload.shape).every((key) => /Id$/.test(key))).toBe(true)
    }
  })
})

describe('every page', () => {
  // Holds the pages of one group and shows nothing of its own.
  const frames = ['groups/[groupId].vue']
  const files = filesBelow('app/pages').map((path) => path.slice('app/pages/'.length))

  it.each(files.filter((file) => !frames.includes(file)))('%s is looked at by axe-core', (file) => {
    expect(pages.map((page) => page.file)).toContain(file)
  })

  it('of the list exists', () => {
    const missing = pages.filter(({ file }) => file !== '../error.vue' && !files.includes(file))
    expect(missing.map(({ file }) => file)).toEqual([])
    expect(filesBelow('app')).toContain('app/error.vue')
  })
})

describe('every module of the engine', () => {
  const modules = filesBelow('shared/engine').filter((path) => path.endsWith('.ts') && !path.endsWith('.d.ts'))
  const specs = filesBelow('tests/engine').filter((path) => path.endsWith('.spec.ts'))

  const reached = (() => {
    const seen = new Set<string>()
    const visit = (path: string) => {
      if (seen.has(path)) return
      seen.add(path)
      for (const { to } of importsOf(path)) {
        if (to === null) continue
        const target = [to, `${to}.ts`, `${to}/index.ts`].find((name) => modules.includes(name) || all.has(name))
        if (target) visit(target)
      }
    }
    const all = new Set([...filesBelow('tests'), ...filesBelow('shared')].filter(isCode))
    specs.forEach(visit)
    return seen
  })()

  it.each(modules)('%s is run by a spec in tests/engine', (path) => {
    expect(reached.has(path)).toBe(true)
  })

  it.each(modules)('%s says what it is for', (path) => {
    expect(/\/\*\*[\s\S]{30,}?\*\//.test(read(path))).toBe(true)
  })

  it('names only specs that exist', () => {
    const named = modules.flatMap((path) =>
      [...read(path).matchAll(/tests\/engine\/[\w./-]+\.spec\.ts/g)].map((match) => ({ path, spec: match[0] })),
    )
    expect(named.length).toBeGreaterThan(20)
    expect(named.filter(({ spec }) => !specs.includes(spec))).toEqual([])
  })

  /**
   * Types, stages, collecting, choosing, memory: what they do has no formula of its own, or is another module's formula
   * computed in another order, held to it number by number.
   */
  const withoutFormula = new Set(
    [
      ...[
        'types',
        'run-types',
        'run',
        'run-work',
        'run-stages',
        'run-collector',
        'stages',
        'preview',
        'engine-version',
      ],
      ...['grid', 'map-kernel', 'signal-row', 'self-check'],
      ...['kernel/kernel-memory', 'kernel/load-kernel', 'kernel/complex-map', 'kernel/batch-transform'],
    ].map((name) => `shared/engine/${name}.ts`),
  )

  it.each(modules.filter((path) => !withoutFormula.has(path)))('%s names its source', (path) => {
    // An author or a handbook with its year, a DOI, the module whose source it shares, or the definition in place.
    expect(read(path)).toMatch(/\b(1[89]\d\d|20[0-2]\d)\b|10\.\d{4,}\/|[Ss]ources?[: ]|[Dd]erived|[Dd]efinitions?/)
  })

  it('is left out of that rule only where it exists', () => {
    expect([...withoutFormula].filter((path) => !modules.includes(path))).toEqual([])
  })
})
