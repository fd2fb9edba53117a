import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { signIn } from './journey'
import { launchBrowser, openPage, type WatchedPage } from './launch'
import { findPlace, type Place } from './pages'

let browser: Browser
let watched: WatchedPage
let page: Page
let place: Place

beforeAll(async () => {
  browser = await launchBrowser()
  watched = await openPage(browser, { baseUrl: inject('baseUrl') })
  page = watched.page
  await signIn(page, inject('demoEmail'), inject('demoPassword'))
  place = await findPlace(page)
})
afterAll(async () => {
  await watched.close()
  await browser.close()
})

/** What has the focus, as a screen reader would say it. */
const focused = () =>
  page.evaluate(() => {
    const element = document.activeElement as HTMLElement | null
    return element?.getAttribute('aria-label') ?? element?.textContent?.trim().slice(0, 60) ?? ''
  })

/** Presses Tab until something of that name has the focus; answers how often. */
const tabTo = async (name: RegExp, most = 80): Promise<number> => {
  for (let presses = 1; presses <= most; presses += 1) {
    await page.keyboard.press('Tab')
    if (name.test(await focused())) return presses
  }
  throw new Error(`Tab did not reach ${name} within ${most} steps; last: ${await focused()}`)
}

describe('by keyboard alone', () => {
  it('skips to the content first', async () => {
    await page.goto(`/groups/${place.groupId}/sets`)
    await page.getByRole('table').waitFor()
    await page.keyboard.press('Tab')
    expect(await focused()).toMatch(/Skip to the content/)
    await page.keyboard.press('Enter')
    expect(await page.evaluate(() => document.activeElement?.id)).toBe('main')
  })

  it('shows where the focus is on everything it reaches', async () => {
    await page.goto(`/groups/${place.groupId}/sets/${place.setId}`)
    await page.locator('[data-stage] canvas, [data-stage] svg').first().waitFor()
    const invisible: string[] = []
    for (let step = 0; step < 60; step += 1) {
      await page.keyboard.press('Tab')
      const found = await page.evaluate(() => {
        const element = document.activeElement
        if (!element || element === document.body) return null
        const box = element.getBoundingClientRect()
        const { outlineStyle, outlineWidth, boxShadow, borderBottomWidth } = getComputedStyle(element)
        const marked = (outlineStyle !== 'none' && Number.parseInt(outlineWidth) > 0) || boxShadow !== 'none'
        return {
          marked: marked || Number.parseInt(borderBottomWidth) > 1,
          seen: box.width > 0 && box.height > 0,
          html: element.outerHTML.slice(0, 120),
        }
      })
      if (found && (!found.marked || !found.seen)) invisible.push(found.html)
    }
    expect(invisible).toEqual([])
  })

  it('opens and leaves a dialog, and comes back to where it was', async () => {
    await page.goto(`/groups/${place.groupId}/sets`)
    await page.getByRole('table').waitFor()
    await tabTo(/From a file/)
    await page.keyboard.press('Enter')
    const dialog = page.getByRole('dialog')
    await dialog.waitFor()
    for (let step = 0; step < 8; step += 1) {
      await page.keyboard.press('Tab')
      expect(await dialog.evaluate((element) => element.contains(document.activeElement))).toBe(true)
    }
    await page.keyboard.press('Escape')
    await dialog.waitFor({ state: 'detached' })
    expect(await focused()).toMatch(/From a file/)
  })

  it('goes through the fields of the parameter table with Enter', async () => {
    await page.goto(`/groups/${place.groupId}/sets/new`)
    const first = page.locator('[data-path="zeroPhononEnergyMeV"]')
    await first.focus()
    await page.keyboard.press('Enter')
    const second = await page.evaluate(() => document.activeElement?.getAttribute('data-path'))
    expect(second).toBe('populationLifetimePs')
    await page.keyboard.press('Shift+Enter')
    expect(await page.evaluate(() => document.activeElement?.getAttribute('data-path'))).toBe('zeroPhononEnergyMeV')
  })

  it('moves the temperature ruler with the arrow keys', async () => {
    await page.goto(`/groups/${place.groupId}/runs/${place.runId}`)
    const ruler = page.getByRole('slider', { name: /temperature/ })
    await ruler.focus()
    const before = await ruler.getAttribute('aria-valuetext')
    await page.keyboard.press('ArrowRight')
    expect(await ruler.getAttribute('aria-valuetext')).not.toBe(before)
    await page.keyboard.press('Home')
    expect(await ruler.getAttribute('aria-valuetext')).toBe(before)
  })

  it('signs out from the account menu', async () => {
    await page.goto('/groups')
    await page.getByRole('heading', { name: 'Groups' }).waitFor()
    await tabTo(/^Account of /)
    await page.keyboard.press('Enter')
    await page.getByRole('menuitem', { name: 'Sign out' }).waitFor()
    await page.keyboard.press('End')
    await page.keyboard.press('Enter')
    await page.getByRole('link', { name: 'Sign in' }).first().waitFor()
    expect(watched.complaints).toEqual([])
  })
})
