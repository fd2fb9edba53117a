import { mkdir, mkdtemp, rm } from 'node:fs/promises'
import { join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { build } from 'esbuild'
import { TaskEndedError, ThreadPool, type TaskOptions } from '../../../server/jobs/pool'

interface Answer {
  ok: boolean
  value: number
  environment?: string[]
}

let directory: string
let pool: ThreadPool

const root = resolve(import.meta.dirname, '../../..')

/** Compiled inside the project, so that the entry finds the same node_modules as a real one. */
beforeAll(async () => {
  await mkdir(join(root, '.data'), { recursive: true })
  directory = await mkdtemp(join(root, '.data/trial-workers-'))
  await build({
    entryPoints: [join(root, 'tests/fixtures/workers/trial.ts')],
    outdir: directory,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    outExtension: { '.js': '.mjs' },
  })
  pool = new ThreadPool({ threads: 2, heapMb: 64, directory: pathToFileURL(`${directory}/`) })
})

afterAll(async () => {
  await pool?.destroy()
  await rm(directory, { recursive: true, force: true })
})

const run = (behaviour: string, options: Partial<TaskOptions> = {}) =>
  pool.run<Answer>({ entry: 'trial', input: { behaviour }, limitMs: 20_000, graceMs: 300, ...options })

const ended = async (work: Promise<unknown>): Promise<TaskEndedError> => {
  try {
    await work
  } catch (error) {
    if (error instanceof TaskEndedError) return error
    throw error
  }
  throw new Error('expected the task to end without an answer; it gave one')
}

describe('the pool of threads', () => {
  it('gives the answer of a thread, which sees nothing of the environment', async () => {
    process.env.SECRET_OF_THE_PARENT = 'x'
    const answer = await run('answer')
    expect(answer).toMatchObject({ ok: true, value: 42 })
    expect(answer.environment).not.toContain('SECRET_OF_THE_PARENT')
  })

  it('delivers every report, also those that the answer overtakes', async () => {
    for (let round = 0; round < 5; round++) {
      const heard: number[] = []
      let started = 0
      await run('burst', { onProgress: (fraction) => heard.push(fraction), onStarted: () => (started += 1) })
      expect(started).toBe(1)
      expect(heard).toHaveLength(500)
      expect(heard.at(-1)).toBe(1)
      expect([...heard].sort((a, b) => a - b)).toEqual(heard)
    }
  })

  it('stops a thread that looks at the flag without ending the thread', async () => {
    const before = await threadIds()
    const abort = new AbortController()
    const started = Date.now()
    const task = ended(run('cooperative', { signal: abort.signal, onStarted: () => abort.abort(), graceMs: 5000 }))
    expect((await task).end).toBe('stopped')
    expect(Date.now() - started).toBeLessThan(4000)
    expect(await threadIds()).toEqual(before)
  })

  it('ends a thread that does not look, after the grace period, and replaces it', async () => {
    const abort = new AbortController()
    const task = ended(run('deaf', { signal: abort.signal, onStarted: () => abort.abort() }))
    expect((await task).end).toBe('stopped')
    expect(pool.alive).toBe(2)
    expect((await run('answer')).value).toBe(42)
    expect(pool.free).toBe(2)
  })

  it('counts the wall limit from the start in the thread, not from the wait for one', async () => {
    const abort = new AbortController()
    const blockers = [0, 1].map(() => ended(run('cooperative', { signal: abort.signal })))
    setTimeout(() => abort.abort(), 600)
    const waited = run('answer', { limitMs: 300 })
    expect((await waited).value).toBe(42)
    await Promise.all(blockers)

    const begun = Date.now()
    expect((await ended(run('deaf', { limitMs: 200 }))).end).toBe('time-limit')
    expect(Date.now() - begun).toBeGreaterThanOrEqual(450)
    expect(pool.alive).toBe(2)
  })

  it('reports a thread that exits, throws or fills its heap as lost, and works on', async () => {
    for (const behaviour of ['exit', 'throw', 'heap']) {
      const error = await ended(run(behaviour))
      expect(error.end, behaviour).toBe('lost')
      expect((await run('answer')).value, behaviour).toBe(42)
      expect(pool.alive, behaviour).toBe(2)
    }
  })

  it('does not start what was stopped before', async () => {
    let started = false
    const task = ended(run('answer', { signal: AbortSignal.abort(), onStarted: () => (started = true) }))
    expect((await task).end).toBe('stopped')
    expect(started).toBe(false)
  })
})

/** Both threads at once, so that each answers. */
const threadIds = async () => {
  const ids = await Promise.all([run('report-thread'), run('report-thread')])
  return ids.map((answer) => answer.value).sort((a, b) => a - b)
}
