import { createHash } from 'node:crypto'
import { writeFile } from 'node:fs/promises'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import {
  bytesOf,
  createGroup,
  downloadBy,
  eventually,
  field,
  newEmail,
  register,
  setField,
  signIn,
  textOf,
} from './journey'
import { launchBrowser, openPage, type WatchedPage } from './launch'

/**
 * The main job from end to end, as one person does it in one sitting: nine steps on one page, in order. Each step
 * leaves the page where the next one begins; none may leave an error on the console.
 */
let browser: Browser
let watched: WatchedPage
let page: Page
let groupId = ''
let setPath = ''
let runPath = ''
let measurementPath = ''
const email = newEmail()
const folder = mkdtempSync(join(tmpdir(), 'walk-'))

beforeAll(async () => {
  browser = await launchBrowser()
  watched = await openPage(browser, { baseUrl: inject('baseUrl') })
  page = watched.page
})
afterAll(async () => {
  await watched.close()
  await browser.close()
  rmSync(folder, { recursive: true, force: true })
})

const expectCalm = () => expect(watched.complaints).toEqual([])

/** A measured absorption as lab software writes it: comments, decimal comma, wavelengths, semicolons. */
const measuredFile = () => {
  const lines = ['# invented absorption, made by this test', '# Temperatur: 5 K', 'Wellenlänge (nm);Absorbanz']
  for (let index = 0; index <= 240; index += 1) {
    const nanometre = 609 + index * 0.05
    const energy = 1_239_841.984332 / nanometre
    const line = 0.9 * Math.exp(-(((energy - 2010.3) / 1.4) ** 2)) + 0.05
    const ripple = 0.004 * Math.sin(index * 1.7)
    lines.push(`${nanometre.toFixed(2)};${(line + ripple).toFixed(5)}`.replaceAll('.', ','))
  }
  return `${lines.join('\r\n')}\r\n`
}

describe('the main job', () => {
  it('1: registers, signs out and in, makes a group and sees it listed', async () => {
    await register(page, 'Wanda Walker', email)
    await page.getByRole('button', { name: 'Account of Wanda Walker' }).click()
    await page.getByRole('menuitem', { name: 'Sign out' }).click()
    await page.getByRole('link', { name: 'Sign in' }).first().waitFor()
    await signIn(page, email)
    groupId = await createGroup(page, 'Quiet phonons')
    await page.goto('/groups')
    await page.getByRole('link', { name: 'Quiet phonons' }).waitFor()
    expect(await page.getByRole('row', { name: /Quiet phonons.*owner/ }).count()).toBe(1)
    expectCalm()
  })

  it('2: writes a parameter set; a wrong value gets its reason beside the field', async () => {
    await page.goto(`/groups/${groupId}/sets/new`)
    await setField(page, 'zeroPhononEnergyMeV', '2.01 eV')
    expect(await field(page, 'zeroPhononEnergyMeV').inputValue()).toBe('2010')
    if ((await field(page, 'bath[0].couplingStrength').count()) === 0) {
      await page.getByRole('button', { name: 'Add term' }).click()
    }
    await setField(page, 'bath[0].couplingStrength', '0.1')
    await setField(page, 'bath[0].exponent', '3')
    await setField(page, 'bath[0].cutoffEnergyMeV', '3')
    await page.getByRole('button', { name: 'Add mode' }).click()
    await setField(page, 'modes[0].label', 'torsion')
    await setField(page, 'modes[0].energyMeV', '8')
    await setField(page, 'modes[0].huangRhys', '60')
    await page.getByText(/expected Huang-Rhys factor as a number, 0 to 50; found 60/).waitFor()
    expect(await page.getByRole('button', { name: 'Save', exact: true }).isDisabled()).toBe(true)
    await setField(page, 'modes[0].huangRhys', '0.15')
    await setField(page, 'zeroPhononFwhmMeV', '0.5')
    await setField(page, 'ensembleFwhmMeV', '2')
    await setField(page, 'temperaturesK', '5, 60')
    await setField(page, 'waitingTimesPs', '0, 1')
    await page.getByText(/expected Huang-Rhys factor/).waitFor({ state: 'detached' })
    expectCalm()
  })

  it('3: sees the four curves redraw while typing', async () => {
    await page.locator('[data-stage][aria-busy="false"]').waitFor()
    for (const name of ['Absorption and emission', 'Spectral density', 'Cross-diagonal slice, rephasing']) {
      await page.getByRole('region', { name }).locator('canvas, svg').first().waitFor()
    }
    const drawing = () =>
      page
        .locator('[data-stage] canvas')
        .evaluateAll((all) => all.map((canvas) => (canvas as HTMLCanvasElement).toDataURL()))
    const before = await drawing()
    await field(page, 'ensembleFwhmMeV').fill('6')
    await eventually('the curves change', async () => JSON.stringify(await drawing()) !== JSON.stringify(before))
    await setField(page, 'ensembleFwhmMeV', '2')
    expectCalm()
  })

  it('4: saves versions; a file goes out and comes back with the same hash', async () => {
    await page.getByRole('button', { name: 'Save', exact: true }).click()
    await page.getByLabel('Name', { exact: true }).fill('Sample Q')
    await page.getByRole('dialog').getByRole('button', { name: 'Save' }).click()
    await page.waitForURL(/\/sets\/[0-9a-f-]{36}$/)
    setPath = new URL(page.url()).pathname
    await setField(page, 'zeroPhononFwhmMeV', '0.6')
    await page.getByRole('button', { name: 'Save', exact: true }).click()
    await page.getByLabel(/^Note on this version/).fill('wider line')
    await page.getByRole('dialog').getByRole('button', { name: 'Save' }).click()
    await page.getByText('version 2').first().waitFor()
    await page.getByRole('tab', { name: /^Versions/ }).click()
    await page.getByText('wider line').waitFor()
    expect(
      await page
        .getByRole('tabpanel', { name: /Versions/ })
        .getByRole('link', { name: /^version \d$/ })
        .allTextContents(),
    ).toEqual(['version 2', 'version 1'])

    await page.getByRole('button', { name: 'More actions on the set' }).click()
    const download = await downloadBy(page, page.getByRole('menuitem', { name: 'Download JSON' }))
    const text = await textOf(download)
    const file = join(folder, 'set.json')
    await writeFile(file, text)
    const detail = await (await watched.context.request.get(`/api${setPath}`)).json()
    await page.goto(`/groups/${groupId}/sets`)
    await page.getByRole('button', { name: 'From a file' }).first().click()
    await page.getByLabel('JSON file, as a set is downloaded').setInputFiles(file)
    await page.getByText(detail.version.contentHash).waitFor()
    await page.getByRole('dialog').getByLabel('Name').fill('Sample Q, from the file')
    await page.getByRole('button', { name: 'Store the set' }).click()
    await page.waitForURL(/\/sets\/[0-9a-f-]{36}$/)
    const copyPath = new URL(page.url()).pathname
    const copy = await (await watched.context.request.get(`/api${copyPath}`)).json()
    expect(copy.version.contentHash).toBe(detail.version.contentHash)
    const again = await watched.context.request.get(`/api${copyPath}/versions/1/file`)
    expect(await again.text()).toBe(text)
    expectCalm()
  })

  it('5: queues a run and watches it to its end', async () => {
    await page.goto(setPath)
    await page.getByRole('button', { name: 'Queue run' }).click()
    const row = page.getByRole('tabpanel', { name: /Runs/ }).getByRole('listitem').first()
    await row
      .getByText(/queued|running|done/)
      .first()
      .waitFor()
    await row.getByText('done').waitFor({ timeout: 120_000 })
    await row.getByRole('link', { name: /version 2/ }).click()
    await page.waitForURL(/\/runs\/[0-9a-f-]{36}/)
    runPath = new URL(page.url()).pathname
    expectCalm()
  })

  it('6: looks at spectra, maps, slices and the measured quantities', async () => {
    const stage = page.locator('[data-stage]')
    await stage.locator('canvas').first().waitFor()
    await stage.getByRole('button', { name: 'logarithmic' }).or(stage.getByText('logarithmic')).first().click()
    await stage.getByText('Maps', { exact: true }).click()
    await stage.getByText('rephasing', { exact: true }).first().waitFor()
    for (const pathway of ['rephasing', 'non-rephasing', 'absorptive']) {
      await stage
        .getByRole('group', { name: 'Pathway' })
        .or(stage.getByRole('radiogroup', { name: 'Pathway' }))
        .getByText(pathway, { exact: true })
        .click()
      for (const part of ['real', 'imaginary', 'magnitude']) {
        await stage
          .getByRole('group', { name: 'Part of the signal' })
          .or(stage.getByRole('radiogroup', { name: 'Part of the signal' }))
          .getByText(part, { exact: true })
          .click()
        await stage.locator('canvas').first().waitFor()
      }
    }
    await stage.getByText('Slices', { exact: true }).click()
    await page.getByText('Cross-diagonal slice').first().waitFor()
    await page.getByText('Diagonal slice', { exact: true }).first().waitFor()
    for (const name of ['zero-phonon weight', 'Debye-Waller factor', 'full width at half maximum', 'Stokes shift']) {
      expect(
        await page.getByRole('rowheader', { name }).or(page.getByRole('cell', { name })).count(),
        name,
      ).toBeGreaterThan(0)
    }
    expectCalm()
  })

  it('7: brings a measured spectrum, answers what is open, stores it; the raw file comes back untouched', async () => {
    const content = Buffer.from(measuredFile(), 'utf8')
    const file = join(folder, 'sample q 5 K.txt')
    await writeFile(file, content)
    await page.goto(`/groups/${groupId}/measurements/new`)
    await page.getByLabel('Spectrum file').setInputFiles(file)
    await page.getByRole('heading', { name: 'What would be stored' }).waitFor()
    expect(await page.getByLabel('Unit of the axis').inputValue()).toMatch(/nm/)
    expect(await page.getByLabel('Decimal mark').inputValue()).toMatch(/comma/)
    await page.getByLabel('Sample', { exact: true }).fill('Sample Q (invented)')
    const store = page.getByRole('button', { name: 'Store measurement' })
    // What the file leaves open is asked; every question is answered with its first choice.
    for (let open = await page.locator('[data-question]').count(); open > 0; open -= 1) {
      await page.locator('[data-question]').first().getByRole('button').first().click()
      await eventually('the answer is taken', async () => (await page.locator('[data-question]').count()) < open)
    }
    await eventually('the measurement can be stored', () => store.isEnabled())
    await store.click()
    await page.waitForURL(/\/measurements\/[0-9a-f-]{36}/)
    measurementPath = new URL(page.url()).pathname
    const download = await downloadBy(page, page.getByRole('link', { name: /sample q 5 K\.txt/ }))
    const sha256 = (bytes: Buffer) => createHash('sha256').update(bytes).digest('hex')
    expect(sha256(await bytesOf(download))).toBe(sha256(content))
    expectCalm()
  })

  it('8: lays the measurement over stored simulations, with scale, offset, residual and chi-square', async () => {
    await page.getByRole('link', { name: 'Lay over simulations' }).click()
    await page.getByRole('button', { name: 'Add to the overlay' }).click()
    const comparison = page.getByRole('region', { name: 'Comparison' }).getByRole('table')
    const row = comparison.getByRole('row').nth(1)
    await row.waitFor()
    const cells = (await row.getByRole('cell').allTextContents()).map((text) => text.trim())
    expect(cells.filter((text) => /\d/.test(text)).length).toBeGreaterThanOrEqual(4)
    expect(await comparison.getByRole('columnheader').allTextContents()).toEqual(
      expect.arrayContaining(['Scale', 'Offset', 'χ²']),
    )
    expect(await row.getByRole('radio', { name: /^Show the residual of / }).isChecked()).toBe(true)
    expectCalm()
  })

  it('9: takes the overlay away as SVG and PNG and its data as CSV', async () => {
    const saveAs = (format: string) => page.getByRole('button', { name: new RegExp(`^Save .* as ${format}$`) }).first()
    const svg = await textOf(await downloadBy(page, saveAs('SVG')))
    expect(svg).toMatch(/^<svg |^<\?xml/)
    expect(svg).not.toMatch(/<script|<foreignObject|href="http| on[a-z]+=/i)
    const png = await bytesOf(await downloadBy(page, saveAs('PNG')))
    expect(png.subarray(0, 8)).toEqual(Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]))
    expect(png.readUInt32BE(16)).toBeGreaterThan(1500)
    const csv = (await textOf(await downloadBy(page, saveAs('CSV')))).trim().split(/\r\n/)
    expect(csv.length).toBeGreaterThan(200)
    expect(csv.some((line) => /-?\d+\.\d+/.test(line))).toBe(true)
    expectCalm()
  })

  it('finds everything again after signing in anew', async () => {
    const other = await openPage(browser, { baseUrl: inject('baseUrl') })
    await signIn(other.page, email)
    for (const [path, words] of [
      [setPath, 'Sample Q'],
      [runPath, 'Sample Q'],
      [measurementPath, 'sample q 5 K'],
    ] as const) {
      await other.page.goto(path)
      await other.page.getByText(words).first().waitFor()
    }
    expect(other.complaints).toEqual([])
    await other.close()
  })
})
