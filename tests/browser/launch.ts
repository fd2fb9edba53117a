import { existsSync } from 'node:fs'
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core'

const places = [process.env.CHROMIUM, '/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome']

/** Debian's Chromium; as root it has no sandbox of its own. */
export const launchBrowser = (): Promise<Browser> => {
  const executablePath = places.find((place) => place && existsSync(place))
  if (!executablePath) throw new Error('Chromium: expected /usr/bin/chromium (Debian package chromium); found none')
  return chromium.launch({
    executablePath,
    args: [
      ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
      '--disable-gpu',
      '--disable-dev-shm-usage',
      '--disable-background-networking',
      '--disable-component-update',
      '--no-first-run',
      '--font-render-hinting=none',
    ],
  })
}

export interface WatchedPage {
  page: Page
  context: BrowserContext
  /** Console errors, uncaught errors, policy violations and requests to other hosts, in words. Must stay empty. */
  complaints: string[]
  close: () => Promise<void>
}

export interface PageOptions {
  baseUrl: string
  width?: number
  height?: number
  colorScheme?: 'light' | 'dark'
  /** Answers that a test provokes on purpose: the browser prints each failed request as a console error. */
  expectedStatus?: number[]
}

/** A page in a fresh profile that notes everything a person would see as broken. */
export const openPage = async (browser: Browser, options: PageOptions): Promise<WatchedPage> => {
  const context = await browser.newContext({
    baseURL: options.baseUrl,
    viewport: { width: options.width ?? 1440, height: options.height ?? 900 },
    colorScheme: options.colorScheme ?? 'light',
    reducedMotion: 'reduce',
    locale: 'en-GB',
    timezoneId: 'UTC',
    acceptDownloads: true,
  })
  context.setDefaultTimeout(20_000)
  await context.addInitScript(() => {
    addEventListener('securitypolicyviolation', (event) => {
      console.error(
        `content security policy: ${event.violatedDirective} refused ${event.blockedURI} at ${event.sourceFile}:${event.lineNumber}:${event.columnNumber}`,
      )
    })
  })
  const page = await context.newPage()
  const complaints: string[] = []
  const expected = (options.expectedStatus ?? []).map((status) => `status of ${status}`)
  page.on('console', (message) => {
    if (message.type() !== 'error' && message.type() !== 'warning') return
    if (expected.some((words) => message.text().includes(words))) return
    complaints.push(`${message.type()}: ${message.text()} (${message.location().url})`)
  })
  page.on('pageerror', (error) => complaints.push(`uncaught: ${error.stack ?? error.message}`))
  page.on('request', (request) => {
    const url = request.url()
    if (!url.startsWith(options.baseUrl) && !/^(data|blob):/.test(url)) complaints.push(`request to ${url}`)
  })
  return { page, context, complaints, close: () => context.close() }
}
