import { mkdir } from 'node:fs/promises'
import { join } from 'node:path'
import type { Browser, Page } from 'playwright-core'
import { signIn } from './journey'
import { launchBrowser, openPage } from './launch'
import { findPlace, pages, unexpected, type PageEntry, type Place } from './pages'

const widths = [
  { width: 1440, height: 900 },
  { width: 390, height: 844 },
] as const
const themes = ['light', 'dark'] as const

/** The few pictures of README.md, in the light theme at full width. */
const chosen = ['set', 'run-spectra', 'run-maps', 'overlay']

interface Request {
  baseUrl: string
  account: { email: string; password: string }
  /** Folder for the pictures of every page. */
  folder: string
  /** Folder of README.md's pictures; left alone when null. */
  readmeFolder: string | null
}

const settle = async (page: Page, entry: PageEntry, place: Place) => {
  await page.goto(entry.path(place))
  await entry.ready(page)
  await page.evaluate(() => document.fonts.ready)
  // Figures are drawn in the frame after their data came.
  await page.waitForTimeout(600)
}

const takeSeries = async (
  browser: Browser,
  request: Request,
  size: (typeof widths)[number],
  colorScheme: 'light' | 'dark',
) => {
  const { baseUrl, account } = request
  const target = join(request.folder, `${size.width}-${colorScheme}`)
  await mkdir(target, { recursive: true })
  const guest = await openPage(browser, { baseUrl, colorScheme, ...size })
  const member = await openPage(browser, { baseUrl, colorScheme, ...size })
  await signIn(member.page, account.email, account.password)
  const place = await findPlace(member.page, 'Sample A1 (invented)', 600_000)
  const found: string[] = []
  for (const entry of pages) {
    const { page, complaints } = entry.guest ? guest : member
    await settle(page, entry, place)
    await page.screenshot({ path: join(target, `${entry.name}.png`), fullPage: size.width < 1000 })
    const isForReadme =
      request.readmeFolder && size.width === 1440 && colorScheme === 'light' && chosen.includes(entry.name)
    if (isForReadme) {
      await mkdir(request.readmeFolder ?? '', { recursive: true })
      await page.screenshot({ path: join(request.readmeFolder ?? '', `${entry.name}.jpg`), type: 'jpeg', quality: 72 })
    }
    found.push(...unexpected(complaints, entry))
  }
  await guest.close()
  await member.close()
  return found
}

/** Pictures of every page at both widths in both themes. Answers what the console complained about. */
export const takePictures = async (request: Request): Promise<string[]> => {
  const browser = await launchBrowser()
  try {
    const complaints: string[] = []
    for (const size of widths) {
      for (const theme of themes) complaints.push(...(await takeSeries(browser, request, size, theme)))
    }
    return complaints
  } finally {
    await browser.close()
  }
}
