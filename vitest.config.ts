import { fileURLToPath } from 'node:url'
import { defineVitestProject } from '@nuxt/test-utils/config'
import { defineConfig, type TestProjectConfiguration } from 'vitest/config'

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url))

const alias = { '#engine': here('./shared/engine'), '#shared': here('./shared') }

/**
 * One project a folder of tests/. Projects with their own server run their files one after another, because the files
 * share that server; `order` keeps the groups from competing for the two cores they are budgeted for.
 */
const nodeProject = (name: string, order: number, test: object = {}): TestProjectConfiguration => ({
  resolve: { alias },
  test: {
    name,
    include: [`tests/${name}/**/*.spec.ts`],
    environment: 'node',
    setupFiles: ['tests/setup/properties.ts'],
    // Hang guards only; speed is judged by `npm run bench`.
    testTimeout: 60_000,
    hookTimeout: 120_000,
    sequence: { groupOrder: order },
    ...test,
  },
})

const withServer = (name: string, order: number, testTimeout: number) =>
  nodeProject(name, order, {
    globalSetup: `tests/${name}/global-setup.ts`,
    testTimeout,
    hookTimeout: 240_000,
    maxWorkers: 1,
  })

/** Loading Nuxt takes seconds, so a run that names other projects only does without it. */
const named = process.argv.flatMap((word, index, words) =>
  word.startsWith('--project=') ? [word.slice(10)] : word === '--project' ? [words[index + 1] ?? ''] : [],
)
const nuxtProject = async () =>
  defineVitestProject({
    resolve: { alias },
    test: {
      name: 'nuxt',
      include: ['tests/nuxt/**/*.spec.ts'],
      setupFiles: ['tests/nuxt/setup.ts'],
      environment: 'nuxt',
      environmentOptions: { nuxt: { domEnvironment: 'happy-dom' } },
      testTimeout: 60_000,
      sequence: { groupOrder: 2 },
    },
  })
const withNuxt = named.length === 0 || named.some((name) => name === 'nuxt' || name.includes('*'))

export default defineConfig({
  test: {
    maxWorkers: 2,
    passWithNoTests: false,
    coverage: { provider: 'v8', include: ['shared/**', 'server/**'], reportsDirectory: 'coverage' },
    projects: [
      nodeProject('guards', 0),
      nodeProject('unit', 1),
      nodeProject('measurement', 1),
      nodeProject('engine', 1, { testTimeout: 180_000 }),
      ...(withNuxt ? [await nuxtProject()] : []),
      withServer('api', 3, 120_000),
      withServer('browser', 4, 240_000),
      // Longer than a test may be: `npm run drill -- NAME`.
      nodeProject('drills', 5, {
        include: ['tests/drills/**/*.drill.ts'],
        testTimeout: 3_600_000,
        hookTimeout: 240_000,
        maxWorkers: 1,
      }),
    ],
  },
})
