import type { Browser } from 'playwright-core'
import { afterAll, afterEach, beforeAll, describe, expect, inject, it } from 'vitest'
import { createGroup, downloadBy, eventually, field, register, setField, textOf } from './journey'
import { launchBrowser, openPage, type WatchedPage } from './launch'

interface PreviewFile {
  engineVersion: string
  temperatureK: number
  preview: {
    spectralDensity: { energiesMeV: number[]; densityMeV: number[] }
    absorption: { energiesMeV: number[]; perMeV: number[] }
    emission: { energiesMeV: number[]; perMeV: number[] }
    crossDiagonal: { shiftsMeV: number[]; re: number[]; im: number[]; magnitude: number[] }
  }
}

let browser: Browser
let watched: WatchedPage

beforeAll(async () => {
  browser = await launchBrowser()
})
afterAll(() => browser.close())
afterEach(() => watched.close())

/** Largest difference of two curves, relative to the larger of their maxima. */
const distance = (found: readonly number[], expected: readonly number[]): number => {
  expect(found.length).toBe(expected.length)
  expect(found.length).toBeGreaterThan(100)
  const scale = Math.max(...expected.map(Math.abs))
  return Math.max(...found.map((value, index) => Math.abs(value - (expected[index] ?? Number.NaN)))) / scale
}

const readPreview = async (): Promise<PreviewFile> => {
  const { page } = watched
  await page.locator('[data-stage][aria-busy="false"]').waitFor()
  const download = await downloadBy(page, page.getByRole('button', { name: 'Data as JSON' }))
  return JSON.parse(await textOf(download)) as PreviewFile
}

/** What is painted, figure by figure. */
const pictures = (): Promise<string[]> =>
  watched.page.locator('[data-stage] section').evaluateAll((sections) =>
    sections.map((section) => {
      const canvases = [...section.querySelectorAll('canvas')].map((canvas) => canvas.toDataURL())
      return [
        ...canvases,
        ...[...section.querySelectorAll('svg path')].map((path) => path.getAttribute('d') ?? ''),
      ].join('\n')
    }),
  )

const fillSet = async () => {
  const { page } = watched
  await setField(page, 'zeroPhononEnergyMeV', '2010')
  if ((await field(page, 'bath[0].couplingStrength').count()) === 0) {
    await page.getByRole('button', { name: 'Add term' }).click()
  }
  await setField(page, 'bath[0].couplingStrength', '0.08')
  await setField(page, 'bath[0].cutoffEnergyMeV', '4')
  await page.getByRole('button', { name: 'Add mode' }).click()
  await setField(page, 'modes[0].label', 'torsion')
  await setField(page, 'modes[0].energyMeV', '11')
  await setField(page, 'modes[0].huangRhys', '0.2')
  await setField(page, 'zeroPhononFwhmMeV', '0.6')
  await setField(page, 'ensembleFwhmMeV', '3')
  await setField(page, 'temperaturesK', '5, 80')
  await setField(page, 'waitingTimesPs', '0.5')
}

describe('the preview', () => {
  it('redraws all four curves without a network, equal to what a worker stores', async () => {
    watched = await openPage(browser, { baseUrl: inject('baseUrl') })
    const { page, context, complaints } = watched
    await register(page, 'Ada Preview')
    const groupId = await createGroup(page, 'Preview group')
    await page.goto(`/groups/${groupId}/sets/new`)
    await fillSet()
    const before = await readPreview()
    const drawnBefore = await pictures()
    expect(drawnBefore.length).toBe(3)

    // No route to anywhere: what redraws now is computed in the page.
    await context.setOffline(true)
    const requests: string[] = []
    page.on('request', (request) => requests.push(request.url()))
    await setField(page, 'bath[0].couplingStrength', '0.12')
    await setField(page, 'modes[0].huangRhys', '0.35')
    await setField(page, 'zeroPhononFwhmMeV', '0.75')
    await eventually('the figures are painted anew', async () => {
      const now = await pictures()
      return now.every((picture, index) => picture !== drawnBefore[index])
    })
    const offline = await readPreview()
    expect(requests.filter((url) => !url.startsWith('blob:'))).toEqual([])
    for (const [key, inner] of [
      ['spectralDensity', 'densityMeV'],
      ['absorption', 'perMeV'],
      ['emission', 'perMeV'],
      ['crossDiagonal', 'magnitude'],
    ] as const) {
      const curve = (file: PreviewFile) => (file.preview[key] as Record<string, number[]>)[inner] ?? []
      expect(curve(offline), key).not.toEqual(curve(before))
    }
    await context.setOffline(false)

    // The same values through the worker, stored, and read back.
    await page.getByRole('button', { name: 'Queue run' }).click()
    await page.getByLabel('Name', { exact: true }).fill('Torsion and acoustic bath')
    await page.getByRole('button', { name: 'Save and queue the run' }).click()
    await page.waitForURL(/\/sets\/[0-9a-f-]{36}$/)
    const runId = await waitForRun(groupId)
    const stored = await readStored(groupId, runId)
    const { spectralDensity, absorption, emission, crossDiagonal } = offline.preview
    const pairs: [string, readonly number[], readonly number[]][] = [
      ['density axis', spectralDensity.energiesMeV, stored['spectralDensity/energies'] ?? []],
      ['density', spectralDensity.densityMeV, stored['spectralDensity/values'] ?? []],
      ['energy axis', absorption.energiesMeV, stored['linear/0/energies'] ?? []],
      ['absorption', absorption.perMeV, stored['absorption/0'] ?? []],
      ['emission', emission.perMeV, stored['emission/0'] ?? []],
      ['shift axis', crossDiagonal.shiftsMeV, stored['crossDiagonal/0/0/shifts'] ?? []],
    ]
    for (const [name, found, expected] of pairs) expect(distance(found, expected), name).toBeLessThan(1e-12)
    const slice = stored['crossDiagonal/0/0/rephasing'] ?? []
    const re = slice.filter((_value, index) => index % 2 === 0)
    const im = slice.filter((_value, index) => index % 2 === 1)
    expect(distance(crossDiagonal.re, re), 'slice, real part').toBeLessThan(1e-12)
    expect(distance(crossDiagonal.im, im), 'slice, imaginary part').toBeLessThan(1e-12)
    expect(complaints).toEqual([])
  })
})

const waitForRun = async (groupId: string): Promise<string> => {
  let runId = ''
  await eventually(
    'the run ends',
    async () => {
      const answer = await watched.context.request.get(`/api/groups/${groupId}/runs`)
      const { runs } = (await answer.json()) as { runs: { id: string; state: string; failure: unknown }[] }
      const [run] = runs
      if (run?.state === 'failed') throw new Error(`the run failed: ${JSON.stringify(run.failure)}`)
      runId = run?.id ?? ''
      return run?.state === 'done'
    },
    120_000,
  )
  return runId
}

const readStored = async (groupId: string, runId: string): Promise<Record<string, number[]>> => {
  const keys = [
    ...['spectralDensity/energies', 'spectralDensity/values', 'linear/0/energies', 'absorption/0', 'emission/0'],
    ...['crossDiagonal/0/0/shifts', 'crossDiagonal/0/0/rephasing'],
  ]
  const stored: Record<string, number[]> = {}
  for (const key of keys) {
    const answer = await watched.context.request.get(`/api/groups/${groupId}/runs/${runId}/arrays/${key}`)
    expect(answer.status(), key).toBe(200)
    expect(['float64', 'complex128']).toContain(answer.headers()['x-array-type'])
    const bytes = await answer.body()
    stored[key] = Array.from(
      new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength)),
    )
  }
  return stored
}
