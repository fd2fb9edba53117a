import { gzipSync } from 'node:zlib'
import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, inject, it } from 'vitest'
import { launchBrowser, openPage } from './launch'

let browser: Browser
beforeAll(async () => {
  browser = await launchBrowser()
})
afterAll(() => browser.close())

describe('the first page', () => {
  it('needs less than 350 kB of script, and no code of the figures', async () => {
    const { page, complaints, close } = await openPage(browser, { baseUrl: inject('baseUrl') })
    const scripts = new Map<string, number>()
    let isDrawing = false
    page.on('response', (response) => {
      if (!/\.js$/.test(new URL(response.url()).pathname)) return
      void response.body().then((body) => {
        scripts.set(response.url(), gzipSync(body, { level: 9 }).length)
        isDrawing ||= body.includes('zrender')
      })
    })
    await page.goto('/', { waitUntil: 'networkidle' })
    await page.getByRole('heading').first().waitFor()
    const bytes = [...scripts.values()].reduce((sum, size) => sum + size, 0)
    expect(scripts.size).toBeGreaterThan(0)
    expect(bytes).toBeGreaterThan(10_000)
    expect(bytes).toBeLessThan(350_000)
    expect(isDrawing).toBe(false)
    expect(complaints).toEqual([])
    await close()
  })

  it('is set in Source Sans 3 from this machine', async () => {
    const { page, close } = await openPage(browser, { baseUrl: inject('baseUrl') })
    await page.goto('/', { waitUntil: 'networkidle' })
    await page.getByRole('heading').first().waitFor()
    const session = await page.context().newCDPSession(page)
    await session.send('DOM.enable')
    await session.send('CSS.enable')
    const { root } = await session.send('DOM.getDocument')
    const { nodeId } = await session.send('DOM.querySelector', { nodeId: root.nodeId, selector: 'h1, h2' })
    const { fonts } = await session.send('CSS.getPlatformFontsForNode', { nodeId })
    expect(fonts.map(({ familyName, isCustomFont }) => ({ family: familyName.slice(0, 13), isCustomFont }))).toEqual([
      { family: 'Source Sans 3', isCustomFont: true },
    ])
    await close()
  })
})
