import { randomBytes } from 'node:crypto'
import { readFile } from 'node:fs/promises'
import type { Download, Locator, Page } from 'playwright-core'

export const password = 'seven quiet lanterns over water'

export const newEmail = (): string => `person.${randomBytes(6).toString('hex')}@institute.example`

/** Fills the registration form as a person would; the page is signed in afterwards. */
export const register = async (page: Page, name: string, email = newEmail()): Promise<string> => {
  await page.goto('/register')
  await page.getByLabel('Name, as colleagues see it').fill(name)
  await page.getByLabel('E-mail address').fill(email)
  await page.getByLabel('Password').fill(password)
  await page.getByRole('button', { name: 'Register' }).click()
  await page.getByRole('button', { name: `Account of ${name}` }).waitFor()
  return email
}

export const signIn = async (page: Page, email: string, secret = password): Promise<void> => {
  await page.goto('/sign-in')
  await page.getByLabel('E-mail address').fill(email)
  await page.getByLabel('Password').fill(secret)
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.getByRole('button', { name: /^Account of / }).waitFor()
}

/** Answers the id of the new group, whose page is open afterwards. */
export const createGroup = async (page: Page, name: string): Promise<string> => {
  await page.goto('/groups')
  const label = page.getByLabel('Name of the new group')
  await label
    .or(page.getByRole('button', { name: 'New group' }))
    .first()
    .waitFor()
  if (!(await label.isVisible())) await page.getByRole('button', { name: 'New group' }).click()
  await label.fill(name)
  await page.getByRole('button', { name: 'Create group' }).click()
  await page.waitForURL(/\/groups\/[0-9a-f-]{36}$/)
  return page.url().slice(-36)
}

/** The field of one quantity in the parameter table. */
export const field = (page: Page, path: string): Locator => page.locator(`[data-path="${path}"]`)

/** Types a value and leaves the field. */
export const setField = async (page: Page, path: string, text: string): Promise<void> => {
  const input = field(page, path)
  await input.fill(text)
  await input.press('Tab')
}

export const textOf = async (download: Download): Promise<string> => readFile(await download.path(), 'utf8')
export const bytesOf = async (download: Download): Promise<Buffer> => readFile(await download.path())

/** Clicks what starts a download and waits for its file. */
export const downloadBy = async (page: Page, target: Locator): Promise<Download> => {
  const [download] = await Promise.all([page.waitForEvent('download'), target.click()])
  return download
}

/** Waits until a check holds; for what the page does by itself. */
export const eventually = async (what: string, check: () => Promise<boolean>, limitMs = 30_000): Promise<void> => {
  const deadline = performance.now() + limitMs
  while (!(await check())) {
    if (performance.now() > deadline) throw new Error(`${what}: did not happen within ${limitMs / 1000} s`)
    await new Promise((resolve) => setTimeout(resolve, 100))
  }
}
