import type { Page } from 'playwright-core'

/** Ids of one group's objects, for the addresses of its pages. */
export interface Place {
  groupId: string
  setId: string
  runId: string
  measurementId: string
}

export interface PageEntry {
  name: string
  /** Source below app/pages that this address shows. */
  file: string
  path: (place: Place) => string
  /** Shown to people who are not signed in. */
  guest?: boolean
  /** What the framework writes to the console on this page, by design. */
  says?: RegExp
  /** Something that is there once the page has settled. */
  ready: (page: Page) => Promise<unknown>
}

/** What the console said beyond what a page says by design. */
export const unexpected = (complaints: string[], { says }: PageEntry): string[] =>
  complaints.splice(0).filter((text) => !says?.test(text))

const heading = (name: string | RegExp) => (page: Page) => page.getByRole('heading', { name }).first().waitFor()
const figure = (page: Page) => page.locator('[data-stage] canvas, [data-stage] svg').first().waitFor()
const tab = (name: string) => async (page: Page) => {
  await page.locator('[data-stage]').getByRole('button', { name, exact: true }).click()
  await figure(page)
  await page.waitForTimeout(500)
}

/** Every page of the application, each in the state in which people work with it. */
export const pages: PageEntry[] = [
  { name: 'landing', file: 'index.vue', path: () => '/', guest: true, ready: heading(/.+/) },
  { name: 'register', file: 'register.vue', path: () => '/register', guest: true, ready: heading('Register') },
  { name: 'sign-in', file: 'sign-in.vue', path: () => '/sign-in', guest: true, ready: heading('Sign in') },
  { name: 'conventions', file: 'conventions.vue', path: () => '/conventions', guest: true, ready: heading(/.+/) },
  // Signed in: strangers are asked to sign in before they learn what is there.
  {
    name: 'nothing-here',
    file: '../error.vue',
    path: () => '/nothing/here',
    says: /Page not found/,
    ready: heading(/.+/),
  },
  { name: 'start', file: 'index.vue', path: () => '/', ready: heading(/.+/) },
  { name: 'account', file: 'account.vue', path: () => '/account', ready: heading(/.+/) },
  { name: 'groups', file: 'groups/index.vue', path: () => '/groups', ready: heading('Groups') },
  {
    name: 'group',
    file: 'groups/[groupId]/index.vue',
    path: ({ groupId }) => `/groups/${groupId}`,
    ready: heading(/.+/),
  },
  {
    name: 'sets',
    file: 'groups/[groupId]/sets/index.vue',
    path: ({ groupId }) => `/groups/${groupId}/sets`,
    ready: (page) => page.getByRole('table').waitFor(),
  },
  {
    name: 'new-set',
    file: 'groups/[groupId]/sets/new.vue',
    path: ({ groupId }) => `/groups/${groupId}/sets/new`,
    ready: figure,
  },
  {
    name: 'set',
    file: 'groups/[groupId]/sets/[setId].vue',
    path: ({ groupId, setId }) => `/groups/${groupId}/sets/${setId}`,
    ready: figure,
  },
  {
    name: 'set-version',
    file: 'groups/[groupId]/sets/[setId].vue',
    path: ({ groupId, setId }) => `/groups/${groupId}/sets/${setId}?version=1`,
    ready: (page) => page.locator('.parameter-table').first().waitFor(),
  },
  {
    name: 'runs',
    file: 'groups/[groupId]/runs/index.vue',
    path: ({ groupId }) => `/groups/${groupId}/runs`,
    ready: heading('Runs'),
  },
  {
    name: 'run-spectra',
    file: 'groups/[groupId]/runs/[runId].vue',
    path: ({ groupId, runId }) => `/groups/${groupId}/runs/${runId}`,
    ready: figure,
  },
  {
    name: 'run-maps',
    file: 'groups/[groupId]/runs/[runId].vue',
    path: ({ groupId, runId }) => `/groups/${groupId}/runs/${runId}`,
    ready: tab('Maps'),
  },
  {
    name: 'run-slices',
    file: 'groups/[groupId]/runs/[runId].vue',
    path: ({ groupId, runId }) => `/groups/${groupId}/runs/${runId}`,
    ready: tab('Slices'),
  },
  {
    name: 'measurements',
    file: 'groups/[groupId]/measurements/index.vue',
    path: ({ groupId }) => `/groups/${groupId}/measurements`,
    ready: (page) => page.getByRole('table').waitFor(),
  },
  {
    name: 'new-measurement',
    file: 'groups/[groupId]/measurements/new.vue',
    path: ({ groupId }) => `/groups/${groupId}/measurements/new`,
    ready: heading('New measurement'),
  },
  {
    name: 'measurement',
    file: 'groups/[groupId]/measurements/[measurementId].vue',
    path: ({ groupId, measurementId }) => `/groups/${groupId}/measurements/${measurementId}`,
    ready: (page) => page.getByRole('region', { name: 'Spectrum' }).locator('canvas, svg').first().waitFor(),
  },
  {
    name: 'overlay',
    file: 'groups/[groupId]/overlay.vue',
    path: ({ groupId, measurementId, runId }) =>
      `/groups/${groupId}/overlay?m=${measurementId}&s=${runId}:0:absorption`,
    ready: figure,
  },
]

interface Listing {
  sets: { id: string; name: string; latestVersion: number }[]
  runs: { id: string; state: string; set: { id: string; name: string } }[]
  measurements: { id: string; name: string; kind: string }[]
}

/**
 * The demo group's objects as the signed-in person sees them: a set with its finished run, and a measured absorption.
 * Waits for the run, which is computed in the background: any of the demo's, or that of one set.
 */
export const findPlace = async (page: Page, setName?: string, limitMs = 180_000): Promise<Place> => {
  const read = async <T>(path: string): Promise<T> => {
    const answer = await page.request.get(`/api${path}`)
    if (!answer.ok()) throw new Error(`GET /api${path}: expected 200; found ${answer.status()}`)
    return (await answer.json()) as T
  }
  const { groups } = await read<{ groups: { id: string }[] }>('/session')
  const groupId = groups[0]?.id ?? ''
  const deadline = performance.now() + limitMs
  for (;;) {
    const { runs } = await read<Listing>(`/groups/${groupId}/runs`)
    const run = runs.find(({ state, set }) => state === 'done' && (setName === undefined || set.name === setName))
    if (run) {
      const { measurements } = await read<Listing>(`/groups/${groupId}/measurements`)
      const measurement = measurements.find(({ kind, name }) => kind === 'absorption' && /A1.* 4 K/.test(name))
      if (!measurement) throw new Error('the demo group has no absorption of sample A1 at 4 K')
      return { groupId, setId: run.set.id, runId: run.id, measurementId: measurement.id }
    }
    if (performance.now() > deadline) throw new Error(`no run of the demo ended within ${limitMs / 1000} s`)
    await page.waitForTimeout(500)
  }
}
