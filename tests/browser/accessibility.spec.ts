import axe from 'axe-core'
import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { signIn } from './journey'
import { launchBrowser, openPage, type WatchedPage } from './launch'
import { findPlace, pages, unexpected, type Place } from './pages'

/** WCAG 2.2 A and AA, and what axe-core calls best practice. */
const tags = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice']

interface Finding {
  rule: string
  help: string
  targets: string[]
}

const findViolations = async (page: Page): Promise<Finding[]> => {
  await page.evaluate(axe.source)
  return page.evaluate(async (values) => {
    const { axe: runner } = window as unknown as { axe: typeof axe }
    const { violations } = await runner.run(document, { runOnly: { type: 'tag', values } })
    return violations.map(({ id, help, nodes }) => ({
      rule: id,
      help,
      targets: nodes.map((node) => `${node.target.join(' ')}: ${node.failureSummary ?? ''}`),
    }))
  }, tags)
}

let browser: Browser
beforeAll(async () => {
  browser = await launchBrowser()
})
afterAll(() => browser.close())

describe.each(['light', 'dark'] as const)('in the %s theme', (colorScheme) => {
  let guestView: WatchedPage
  let wide: WatchedPage
  let narrow: WatchedPage
  let place: Place

  beforeAll(async () => {
    // A page that shows an error answers with its status; the browser notes that, and it is meant.
    const common = { baseUrl: inject('baseUrl'), colorScheme, expectedStatus: [404] }
    guestView = await openPage(browser, common)
    wide = await openPage(browser, common)
    await signIn(wide.page, inject('demoEmail'), inject('demoPassword'))
    place = await findPlace(wide.page)
    narrow = await openPage(browser, { ...common, width: 390, height: 844 })
    await signIn(narrow.page, inject('demoEmail'), inject('demoPassword'))
  })
  afterAll(async () => {
    for (const view of [guestView, wide, narrow]) await view.close()
  })

  it.each(pages)('$name has no barrier that axe-core finds', async (entry) => {
    const { path, guest, ready } = entry
    const view = guest ? guestView : wide
    await view.page.goto(path(place))
    await ready(view.page)
    expect(await findViolations(view.page)).toEqual([])
    expect(unexpected(view.complaints, entry)).toEqual([])
  })

  it.each(pages.filter(({ guest }) => !guest))('$name can be read on a phone', async (entry) => {
    const { path, ready } = entry
    const { page, complaints } = narrow
    await page.setViewportSize({ width: 390, height: 844 })
    await page.goto(path(place))
    await ready(page)
    const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
    expect(overflow, 'pixels beside the screen').toBeLessThanOrEqual(0)
    // All of the page at once: what happens to lie below a strip that stays in view counts as covered otherwise.
    const height = await page.evaluate(() => document.documentElement.scrollHeight)
    await page.setViewportSize({ width: 390, height })
    expect(await findViolations(page)).toEqual([])
    expect(unexpected(complaints, entry)).toEqual([])
  })
})
