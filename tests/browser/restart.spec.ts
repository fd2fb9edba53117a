import { randomBytes } from 'node:crypto'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { createDatabase, dropDatabase } from '../../scripts/pg.mjs'
import { migrateDatabase } from '../../server/database/migrate'
import { startServer, type BuiltServer } from '../support/server'
import { createGroup, eventually, field, register, setField } from './journey'
import { launchBrowser, openPage, type WatchedPage } from './launch'

/** A server of its own, because this file kills it. Quick heartbeats, so that nobody waits half a minute. */
const database = `test_restart_${randomBytes(6).toString('hex')}`
const folder = mkdtempSync(join(tmpdir(), 'restart-'))
let env: Record<string, string>
let server: BuiltServer
let browser: Browser
let watched: WatchedPage

beforeAll(async () => {
  const addresses = await createDatabase(database)
  await migrateDatabase(addresses.DATABASE_OWNER_URL, new URL(addresses.DATABASE_URL).username)
  env = {
    DATABASE_URL: addresses.DATABASE_URL,
    NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
    NUXT_STORAGE_DIR: join(folder, 'files'),
    LINEWRIGHT_HEARTBEAT_MS: '500',
    LINEWRIGHT_HEARTBEAT_STALE_MS: '2000',
    LINEWRIGHT_RESCUE_MS: '500',
  }
  server = await startServer({ env })
  browser = await launchBrowser()
  watched = await openPage(browser, { baseUrl: server.baseUrl })
})
afterAll(async () => {
  await watched.close()
  await browser.close()
  await server.stop()
  await dropDatabase(database)
  rmSync(folder, { recursive: true, force: true })
})

interface RunState {
  state: string
  attempt: number
}

describe('a server that is killed in the middle of a run', () => {
  it('has lost nothing when it is back, and the open page finds out by itself', async () => {
    const { page, context } = watched
    await register(page, 'Rosa Restart')
    const groupId = await createGroup(page, 'Interrupted')
    await page.goto(`/groups/${groupId}/sets/new`)
    await setField(page, 'zeroPhononEnergyMeV', '2000')
    if ((await field(page, 'bath[0].couplingStrength').count()) === 0) {
      await page.getByRole('button', { name: 'Add term' }).click()
    }
    await setField(page, 'zeroPhononFwhmMeV', '0.2')
    // Long enough to be killed in: four large maps at each of four temperatures.
    await setField(page, 'temperaturesK', '4, 20, 60, 120')
    await setField(page, 'waitingTimesPs', '0, 1, 4, 16')
    await page.getByRole('button', { name: 'Queue run' }).click()
    await page.getByLabel('Name', { exact: true }).fill('Long one')
    await page.getByRole('button', { name: 'Save and queue the run' }).click()
    await page.getByRole('tab', { name: /^Runs/ }).waitFor()
    await page.getByRole('tab', { name: /^Runs/ }).click()

    const latest = async (): Promise<RunState> => {
      const answer = await context.request.get(`/api/groups/${groupId}/runs`)
      const { runs } = (await answer.json()) as { runs: RunState[] }
      return runs[0] ?? { state: 'missing', attempt: 0 }
    }
    await eventually('the run is being computed', async () => (await latest()).state === 'running')
    await server.stop('SIGKILL')
    server = await startServer({ env, port: server.port })

    const session = (await (await context.request.get('/api/session')).json()) as { user: { name: string } | null }
    expect(session.user?.name).toBe('Rosa Restart')
    await eventually('another attempt begins', async () => (await latest()).attempt >= 2, 60_000)
    // The page was never reloaded.
    await page.getByRole('listitem').getByText('done').waitFor({ timeout: 180_000 })
    expect((await latest()).state).toBe('done')
    const away = /ERR_CONNECTION_REFUSED|ERR_INCOMPLETE_CHUNKED_ENCODING|ERR_CONNECTION_RESET|ERR_EMPTY_RESPONSE|503/
    expect(watched.complaints.filter((complaint) => !away.test(complaint))).toEqual([])
  })
})
