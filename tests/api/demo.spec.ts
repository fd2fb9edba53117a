import { readFileSync, rmSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { beforeAll, describe, expect, inject, it } from 'vitest'
import { loadDemo, type Demo } from '../../scripts/demo/load-demo'
import { projectRoot } from '../support/server'
import { Client } from './support/client'
import { sql } from './support/database'

let demo: Demo
const load = () => loadDemo({ databaseUrl: inject('databaseUrl'), storageDir: inject('storageDir') })

beforeAll(async () => {
  // Larger tables are read by a thread; the built server's entries serve this process as well.
  process.env.WORKERS_DIR = join(projectRoot, '.output/server/workers')
  demo = await load()
})

const signIn = async (role: string): Promise<Client> => {
  const account = demo.accounts.find((entry) => entry.role === role)
  const client = new Client()
  const answer = await client.post('/api/session', { email: account?.email, password: account?.password })
  expect(answer.status, answer.text).toBe(200)
  return client
}

describe('the demo', () => {
  it('prints passwords once and keeps them where only their owner can read', () => {
    expect(demo.isNew).toBe(true)
    expect(demo.accounts.map(({ role }) => role)).toEqual(['owner', 'editor', 'viewer'])
    expect(new Set(demo.accounts.map(({ password }) => password)).size).toBe(3)
    for (const { password, email } of demo.accounts) {
      expect(password.length).toBeGreaterThanOrEqual(20)
      expect(email).toMatch(/@demo\.example\.org$/)
    }
    expect(statSync(demo.passwordFile).mode & 0o777).toBe(0o600)
    const kept = JSON.parse(readFileSync(demo.passwordFile, 'utf8'))
    expect(kept.passwords[demo.accounts[0]?.email ?? '']).toBe(demo.accounts[0]?.password)
  })

  it.each(['owner', 'editor', 'viewer'])('lets its %s in, in that role', async (role) => {
    const session = await (await signIn(role)).get('/api/session')
    expect(session.json.groups).toEqual([{ id: demo.groupId, name: 'Demo group (invented)', role, isDemo: true }])
  })

  it('shows sets with versions, invented measurements and runs that become results', async () => {
    const client = await signIn('viewer')
    const path = `/api/groups/${demo.groupId}`
    const { sets } = (await client.get(`${path}/sets`)).json
    expect(sets).toHaveLength(4)
    expect(sets.every(({ name }: { name: string }) => name.includes('(invented)'))).toBe(true)
    const { measurements } = (await client.get(`${path}/measurements`)).json
    expect(measurements).toHaveLength(5)
    expect(new Set(measurements.map((entry: { reading: { axisUnit: string } }) => entry.reading.axisUnit)).size).toBe(4)
    for (const { name, isInvented, note, file, id } of measurements) {
      expect(isInvented).toBe(true)
      expect(name).toMatch(/invented/)
      expect(note).toMatch(/Invented/)
      expect(file.name).toMatch(/^invented-/)
      const content = await client.get(`${path}/files/${file.id}/content`)
      expect(content.text.split('\n', 1)[0]).toMatch(/INVENTED DATA/)
      const { energiesMeV } = (await client.get(`${path}/measurements/${id}`)).json
      expect(energiesMeV.length).toBeGreaterThan(200)
    }
    let states: string[] = []
    for (let tries = 0; tries < 400; tries += 1) {
      states = (await client.get(`${path}/runs`)).json.runs.map(({ state }: { state: string }) => state)
      if (states.every((state) => state === 'done')) break
      await pause(250)
    }
    expect(states).toEqual(['done', 'done', 'done', 'done'])
  })

  it('changes nothing when it is loaded again', async () => {
    const count = async () => {
      const [row] = await sql<{ sets: number; files: number; runs: number }>(
        `select (select count(*)::int from parameter_sets) sets, (select count(*)::int from files) files,
                (select count(*)::int from runs) runs`,
        [],
        demo.groupId,
      )
      return row
    }
    const before = await count()
    const again = await load()
    expect(again.isNew).toBe(false)
    expect(again.groupId).toBe(demo.groupId)
    expect(again.accounts).toEqual(demo.accounts)
    expect(await count()).toEqual(before)
    await signIn('owner')
  })

  it('gives a lost password file new passwords, and the old ones end', async () => {
    const old = demo.accounts[2]
    rmSync(demo.passwordFile)
    demo = await load()
    expect(demo.isNew).toBe(true)
    await signIn('viewer')
    const answer = await new Client().post('/api/session', { email: old?.email, password: old?.password })
    expect(answer.status).toBe(401)
  })
})
