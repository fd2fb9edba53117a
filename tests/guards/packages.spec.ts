import semver from 'semver'
import { describe, expect, it } from 'vitest'
import { allImports, filesBelow, packageOf, read } from './source-tree'

interface Manifest {
  dependencies: Record<string, string>
  devDependencies: Record<string, string>
  engines: { node: string }
  overrides: Record<string, string>
}

interface LockEntry {
  version?: string
  resolved?: string
  integrity?: string
  engines?: { node?: string }
  hasInstallScript?: boolean
  dev?: boolean
  optional?: boolean
  /** Comes inside another package and shares its checksum. */
  inBundle?: boolean
}

const manifest = JSON.parse(read('package.json')) as Manifest
const lock = JSON.parse(read('package-lock.json')).packages as Record<string, LockEntry>
const locked = Object.entries(lock).filter(([path]) => path !== '')
const nuxtConfig = read('nuxt.config.ts')
const edges = allImports()

const importedBy = (name: string, rooms: string[]) =>
  edges.filter(({ from, specifier }) => packageOf(specifier) === name && rooms.includes(from.split('/')[0] ?? ''))

describe('the fixed packages', () => {
  const product = ['app', 'server', 'shared', 'workers']

  it.each([
    ...['pinia', 'drizzle-orm', 'pg', 'pg-boss', 'mathjs', 'complex.js', 'echarts', 'vue-echarts', 'piscina', 'zod'],
  ])('%s is imported by the product', (name) => {
    const importers = importedBy(name, product).filter(({ typeOnly }) => !typeOnly)
    expect(importers.map(({ from }) => from)).not.toEqual([])
  })

  it.each(['@pinia/nuxt', '@nuxtjs/tailwindcss', 'nuxt-auth-utils'])('%s is a module of the application', (name) => {
    expect(nuxtConfig).toContain(`'${name}'`)
  })

  it('Vue draws the pages', () => {
    expect(filesBelow('app').filter((path) => path.endsWith('.vue')).length).toBeGreaterThan(10)
  })

  it('Nuxt builds the application', () => {
    expect(nuxtConfig).toContain('defineNuxtConfig')
    expect(manifest.dependencies.nuxt).toMatch(/^4\./)
  })

  it('nuxt-auth-utils seals the sessions and hashes the passwords', () => {
    const server = edges.filter(({ from }) => from.startsWith('server/')).map(({ from }) => read(from))
    for (const name of ['setUserSession', 'hashPassword', 'verifyPassword']) {
      expect(server.some((text) => text.includes(name))).toBe(true)
    }
  })

  it('Source Sans 3 comes from its package', () => {
    expect(read('app/assets/css/main.css') + read('app/assets/css/fonts.css')).toContain('@fontsource/source-sans-3')
  })

  it('vitest runs the tests', () => {
    expect(importedBy('vitest', ['tests']).length).toBeGreaterThan(10)
  })
})

describe('versions', () => {
  const direct = { ...manifest.dependencies, ...manifest.devDependencies, ...manifest.overrides }

  it.each(Object.entries(direct))('%s is pinned to one version (%s)', (_name, version) => {
    expect(version).toMatch(/^\d+\.\d+\.\d+$/)
  })

  it('are locked with a checksum and without the name of a host', () => {
    expect(locked.filter(([, entry]) => entry.resolved).map(([path]) => path)).toEqual([])
    expect(locked.filter(([, entry]) => !entry.integrity && !entry.inBundle).map(([path]) => path)).toEqual([])
  })

  it.each(['20.19.0', '20.20.2', '22.13.0'])('all accept Node %s', (version) => {
    expect(semver.satisfies(version, manifest.engines.node)).toBe(true)
    const refusing = locked.filter(([, { engines, optional }]) => {
      return engines?.node && !optional && !semver.satisfies(version, engines.node)
    })
    expect(refusing.map(([path, { engines }]) => `${path}: ${engines?.node}`)).toEqual([])
  })

  it('have one h3 and one vue in the tree', () => {
    for (const name of ['h3', 'vue', 'drizzle-orm', 'zod']) {
      expect(locked.filter(([path]) => path.endsWith(`node_modules/${name}`)).map(([path]) => path)).toEqual([
        `node_modules/${name}`,
      ])
    }
  })

  it('let nothing but esbuild run a script when installed', () => {
    // npm counts these too; they are optional and bring no script that runs on this platform.
    const harmless = /node_modules\/(fsevents|@parcel\/watcher)$/
    const scripts = locked
      .filter(([path, entry]) => entry.hasInstallScript && !harmless.test(path))
      .map(([path]) => path)
    expect(scripts.filter((path) => !path.endsWith('node_modules/esbuild'))).toEqual([])
  })

  it('are used: no direct dependency is left over', () => {
    const named = [
      nuxtConfig,
      read('package.json'),
      read('app/assets/css/main.css'),
      read('app/assets/css/fonts.css'),
      read('vitest.config.ts'),
      read('eslint.config.mjs'),
    ].join('\n')
    const toolsOnly = [
      '@types/',
      '@vitest/coverage-v8',
      'typescript',
      'vue-tsc',
      'vite',
      '@nuxt/kit',
      'vue-router',
      '@vue/test-utils',
      'happy-dom',
      '@iconify-json/',
    ]
    const unused = Object.keys({ ...manifest.dependencies, ...manifest.devDependencies }).filter((name) => {
      if (toolsOnly.some((tool) => name === tool || (tool.endsWith('/') && name.startsWith(tool)))) return false
      const scripts = JSON.stringify(JSON.parse(read('package.json')).scripts)
      const config = named.replaceAll(read('package.json'), scripts)
      return (
        importedBy(name, ['app', 'server', 'shared', 'workers', 'scripts', 'tests']).length === 0 &&
        !config.includes(`${name}`)
      )
    })
    expect(unused).toEqual([])
  })
})
