import { setTimeout as pause } from 'node:timers/promises'
import { spawnSync } from 'node:child_process'
import { describe, expect, it } from 'vitest'
import { ProgressWriter } from '../../../server/jobs/progress-writer'
import { assertHandlers } from '../../../server/jobs/registry'
import { readJobSettings } from '../../../server/jobs/settings'
import { isKnownDead, workerId } from '../../../server/jobs/worker-identity'
import { toStoredResult } from '../../../server/services/run-results'

describe('the registry', () => {
  it('refuses a missing and an unknown handler by name', () => {
    expect(() => assertHandlers({ simulate: {} })).not.toThrow()
    expect(() => assertHandlers({})).toThrow('missing: simulate; unknown: none')
    expect(() => assertHandlers({ simulate: {}, dream: {} })).toThrow('missing: none; unknown: dream')
  })
})

describe('the settings of the queue', () => {
  it('have defaults', () => {
    const settings = readJobSettings({})
    expect(settings).toMatchObject({ heartbeatMs: 10_000, heartbeatStaleMs: 30_000, stopGraceMs: 1500 })
    expect(settings.threads).toBeGreaterThanOrEqual(1)
  })

  it('refuse wrong values with the name of the variable', () => {
    expect(() => readJobSettings({ LINEWRIGHT_WORKER_THREADS: '0' })).toThrow('LINEWRIGHT_WORKER_THREADS')
    expect(() => readJobSettings({ LINEWRIGHT_RUN_LIMIT_MS: 'soon' })).toThrow('LINEWRIGHT_RUN_LIMIT_MS')
    expect(() => readJobSettings({ LINEWRIGHT_HEARTBEAT_STALE_MS: '15000' })).toThrow('at least twice')
  })
})

describe('the writer of progress', () => {
  it('writes the newest value now and then, one at a time, never a lower one', async () => {
    const written: number[] = []
    let open = 0
    let most = 0
    const writer = new ProgressWriter(async (progress) => {
      most = Math.max(most, ++open)
      await pause(15)
      open -= 1
      written.push(progress)
    }, 20)
    for (let step = 1; step <= 200; step++) {
      writer.report(step / 200)
      writer.report(step / 400)
      await pause(1)
    }
    await pause(60)
    await writer.close()
    expect(most).toBe(1)
    expect(written.length).toBeGreaterThan(2)
    expect(written.length).toBeLessThan(40)
    expect([...written].sort((a, b) => a - b)).toEqual(written)
    expect(written.at(-1)).toBe(1)
  })

  it('waits for the write under way when it is closed, and writes no more', async () => {
    let finished = 0
    const writer = new ProgressWriter(async () => {
      await pause(50)
      finished += 1
    }, 5)
    writer.report(0.5)
    await pause(20)
    await writer.close()
    expect(finished).toBe(1)
    writer.report(0.9)
    await pause(30)
    expect(finished).toBe(1)
  })
})

describe('the identity of a worker', () => {
  const [place, pid] = workerId.split('/') as [string, string]

  it('tells the dead from the living of this machine', () => {
    const { pid: gone } = spawnSync(process.execPath, ['-e', ''])
    expect(isKnownDead(workerId)).toBe(false)
    expect(isKnownDead(`${place}/${process.ppid}/abc`)).toBe(false)
    expect(isKnownDead(`${place}/${gone}/abc`)).toBe(true)
    // An earlier process that had the number which this one has now.
    expect(isKnownDead(`${place}/${pid}/another`)).toBe(true)
  })

  it('claims nothing about other machines and other texts', () => {
    expect(isKnownDead('another-boot.1/1/abc')).toBe(false)
    expect(isKnownDead('')).toBe(false)
    expect(isKnownDead(`${place}/`)).toBe(false)
  })
})

describe('an answer of a thread', () => {
  const array = { key: 'absorption/0', dataType: 'float64' as const, shape: [2], unit: '1/meV' }
  const summary = {
    engineVersion: '1',
    temperaturesK: [4],
    waitingTimesPs: [0],
    linearGrid: [],
    mapGrid: [],
    warnings: [],
    notes: [],
    quantities: [],
    broadeningError: 0,
    arrays: [{ ...array, sha256: 'x' }],
  }
  const data = Float64Array.of(1, -2)

  it('becomes bytes, little-endian', () => {
    const { arrays } = toStoredResult({ summary, arrays: [{ ...array, data }] })
    expect(arrays[0]?.bytes.readDoubleLE(8)).toBe(-2)
    expect(arrays[0]?.sha256).toBe('x')
  })

  it('is refused when arrays and summary do not agree, or a number is not finite', () => {
    const bad = [
      { summary, arrays: [] },
      { summary, arrays: [{ ...array, key: 'other', data }] },
      { summary, arrays: [{ ...array, shape: [3], data }] },
      { summary, arrays: [{ ...array, data: Float64Array.of(1) }] },
      { summary: { ...summary, broadeningError: Number.NaN }, arrays: [{ ...array, data }] },
    ]
    for (const answer of bad) expect(() => toStoredResult(answer)).toThrow()
  })
})
