import { existsSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { filesBelow, isCode, read, root } from './source-tree'

const rooms = ['app', 'server', 'shared', 'workers', 'drizzle', 'tests', 'scripts', 'public']
const kept = ['.ci', ...rooms]

/** Made by tools and ignored by git. */
const made = ['.git', '.nuxt', '.output', '.data', '.kernel', 'node_modules', 'coverage']

describe('the layout of the house', () => {
  it('has no folder at the top beside its rooms', () => {
    const folders = readdirSync(root, { withFileTypes: true })
      .filter((entry) => entry.isDirectory() && !made.includes(entry.name))
      .map((entry) => entry.name)
    expect(folders.filter((name) => !kept.includes(name))).toEqual([])
  })

  it.each(['app', 'server', 'shared', 'workers', 'scripts', 'tests'])(
    '%s says what it is for and how its types are checked',
    (room) => {
      expect(existsSync(join(root, room, 'README.md'))).toBe(true)
      expect(existsSync(join(root, room, 'tsconfig.json'))).toBe(true)
    },
  )

  it('gives every room its type check from the root', () => {
    const references = JSON.parse(read('tsconfig.json')).references.map((reference: { path: string }) => reference.path)
    for (const room of ['app', 'server', 'shared', 'shared/engine', 'workers', 'scripts', 'tests']) {
      expect(references).toContain(`./${room}/tsconfig.json`)
    }
  })

  it('names files in kebab-case, components in PascalCase', () => {
    const wrong = [...rooms, '.ci'].flatMap(filesBelow).filter((path) => {
      const name = path.slice(path.lastIndexOf('/') + 1)
      if (/^(README\.md|\.gitkeep|\.gitignore)$/.test(name) || path.startsWith('drizzle/')) return false
      if (path.startsWith('app/components/')) return !/^([A-Z][A-Za-z0-9]*\.vue|[a-z0-9-]+(\.[a-z]+)*\.ts)$/.test(name)
      if (path.startsWith('app/composables/')) return !/^use[A-Z][A-Za-z0-9]*\.ts$/.test(name)
      if (/\/\[/.test(path)) return false
      return !/^[a-z0-9][a-z0-9-]*(\.[a-z0-9-]+)*$/.test(name) && !/\.(py|json|csv)$/.test(name)
    })
    expect(wrong).toEqual([])
  })

  it('keeps every file of code below 400 lines', () => {
    const long = [...rooms.filter((room) => room !== 'drizzle')]
      .flatMap(filesBelow)
      // The yardstick is a script of its own that can be copied and run anywhere, hence one file.
      .filter((path) => path !== 'tests/bench/numpy_baseline.py')
      .filter((path) => isCode(path) || path.endsWith('.css') || path.endsWith('.py'))
      .map((path) => ({ path, lines: read(path).split('\n').length }))
      .filter(({ lines }) => lines > 400)
    expect(long).toEqual([])
  })

  it('leaves no notes to self in the code', () => {
    const notes = ['TO' + 'DO', 'FIX' + 'ME', 'XX' + 'X', 'HA' + 'CK']
    const pattern = new RegExp(`\\b(${notes.join('|')})\\b`)
    const found = rooms
      .flatMap(filesBelow)
      .filter((path) => (isCode(path) || path.endsWith('.md')) && pattern.test(read(path)))
    expect(found).toEqual([])
  })
})

describe('what is written', () => {
  it('speaks of nothing outside the repository', () => {
    // Built from parts, so that this list is not found by itself.
    const names = ['PHYSICS', 'TARGETS', 'STACK', 'PERF', 'REFERENCE', 'ENGINE', 'PRODUCT', 'STYLE', 'ARCHITECTURE']
    const outside = new RegExp(`\\b(${names.join('|')})(\\.md\\b|: )|/${'work'}/|/tmp/${'lw'}`)
    const found = ['', ...rooms]
      .flatMap((room) =>
        room === '' ? ['README.md', 'DEVELOPERS.md', 'SECURITY.md', 'nuxt.config.ts'] : filesBelow(room),
      )
      .filter((path) => (isCode(path) || /\.(md|py|css|as)$/.test(path)) && outside.test(read(path)))
    expect(found).toEqual([])
  })
})

describe('the tests', () => {
  const specs = filesBelow('tests').filter((path) => /\.(spec|test)\.ts$/.test(path))

  it('lie where a project of vitest.config.ts finds them', () => {
    const projects = ['unit', 'measurement', 'engine', 'nuxt', 'guards', 'api', 'browser']
    expect(
      specs.filter((path) => !projects.some((name) => path.startsWith(`tests/${name}/`) && path.endsWith('.spec.ts'))),
    ).toEqual([])
  })

  it('are all run: none is skipped, none runs alone', () => {
    const pattern = /\b(it|test|describe)\.(skip|only|todo|fails|skipIf|runIf)\b/
    expect(specs.filter((path) => pattern.test(read(path)))).toEqual([])
  })

  it('all expect something', () => {
    expect(specs.filter((path) => !/\bexpect|\bassert|fc\.assert/.test(read(path)))).toEqual([])
  })
})
