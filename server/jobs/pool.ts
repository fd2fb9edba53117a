import { resolve } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { MessageChannel, receiveMessageOnPort, type MessagePort } from 'node:worker_threads'
import { Piscina } from 'piscina'
import type { WorkerReport } from '../../shared/schemas/worker-messages'

/** Why a computation ended without an answer. */
export type TaskEnd = 'stopped' | 'time-limit' | 'lost'

/** A computation that gave no answer. `lost`: its thread died (memory, exit), `stopped`: the caller's signal. */
export class TaskEndedError extends Error {
  readonly end: TaskEnd

  constructor(end: TaskEnd, message: string, cause?: unknown) {
    super(message, { cause })
    this.name = 'TaskEndedError'
    this.end = end
  }
}

export interface PoolOptions {
  threads: number
  heapMb: number
  /** Folder of the compiled thread entries. */
  directory?: URL
}

export interface TaskOptions {
  /** File name without extension in workers/, which is also the name of the function it exports. */
  entry: string
  /** Plain data; the pool adds `stop` and `port`. */
  input: Record<string, unknown>
  /** Wall time from the thread's own `started` message, so that waiting for a thread never counts. */
  limitMs: number
  /** Time between raising the stop flag and ending the thread. */
  graceMs: number
  signal?: AbortSignal
  onStarted?: () => void
  onProgress?: (fraction: number) => void
}

/**
 * Where the compiled entries lie: beside the server's entry, or where WORKERS_DIR says (tests). Called only once the
 * server runs: while its modules are being evaluated, `import.meta.url` of a bundled server is not yet a real address.
 */
const workersDirectory = (): URL =>
  process.env.WORKERS_DIR
    ? pathToFileURL(`${resolve(process.env.WORKERS_DIR)}/`)
    : new URL('./workers/', import.meta.url)

/** A bounded set of threads, one task a thread. The only place that knows piscina. */
export class ThreadPool {
  readonly threads: number
  readonly #pool: Piscina
  readonly #directory: URL
  #busy = 0

  constructor(options: PoolOptions) {
    this.threads = options.threads
    this.#directory = options.directory ?? workersDirectory()
    this.#pool = new Piscina({
      minThreads: options.threads,
      maxThreads: options.threads,
      concurrentTasksPerWorker: 1,
      // The queue is in PostgreSQL; this one only bridges the moment in which a killed thread is replaced.
      maxQueue: options.threads,
      resourceLimits: { maxOldGenerationSizeMb: options.heapMb },
      // Threads compute and nothing else: they get no database address and no secret.
      env: {},
      niceIncrement: 5,
      closeTimeout: 1000,
    })
    // Emitted for a thread that dies between tasks; piscina replaces it. Without a listener the process would end.
    this.#pool.on('error', () => undefined)
  }

  get free(): number {
    return this.threads - this.#busy
  }

  /** Threads that exist at present: after one was ended, its replacement counts at once. */
  get alive(): number {
    return this.#pool.threads.length
  }

  async run<Answer extends { ok: boolean }>(options: TaskOptions): Promise<Answer> {
    this.#busy += 1
    try {
      return await this.#run<Answer>(options)
    } finally {
      this.#busy -= 1
    }
  }

  async #run<Answer extends { ok: boolean }>(options: TaskOptions): Promise<Answer> {
    if (options.signal?.aborted) throw new TaskEndedError('stopped', 'The computation was stopped before it started.')
    const stop = new Int32Array(new SharedArrayBuffer(4))
    const { port1, port2 } = new MessageChannel()
    const hardStop = new AbortController()
    let end: TaskEnd | undefined
    let graceTimer: NodeJS.Timeout | undefined
    let limitTimer: NodeJS.Timeout | undefined

    const endWith = (reason: TaskEnd) => {
      if (end) return
      end = reason
      // A busy thread reads no messages, but it can look at shared memory between two pieces of work.
      Atomics.store(stop, 0, 1)
      graceTimer = setTimeout(() => hardStop.abort(), options.graceMs)
    }
    const hear = (report: WorkerReport) => {
      if (report.type === 'started') {
        limitTimer = setTimeout(() => endWith('time-limit'), options.limitMs)
        options.onStarted?.()
      } else {
        options.onProgress?.(report.fraction)
      }
    }
    const onSignal = () => endWith('stopped')
    port1.on('message', hear)
    options.signal?.addEventListener('abort', onSignal, { once: true })

    try {
      const answer: Answer = await this.#pool.run(
        { ...options.input, stop, port: port2 },
        {
          filename: fileURLToPath(new URL(`./${options.entry}.mjs`, this.#directory)),
          name: options.entry,
          transferList: [port2],
          signal: hardStop.signal,
        },
      )
      drain(port1, hear)
      // An answer that was ready when the stop came is still an answer; the caller decides whether it may be stored.
      if (end && !answer.ok) throw endedError(end)
      return answer
    } catch (error) {
      if (error instanceof TaskEndedError) throw error
      throw end ? endedError(end, error) : new TaskEndedError('lost', `The thread ended: ${textOf(error)}`, error)
    } finally {
      clearTimeout(graceTimer)
      clearTimeout(limitTimer)
      options.signal?.removeEventListener('abort', onSignal)
      port1.close()
    }
  }

  /** Ends every thread at once. */
  async destroy(): Promise<void> {
    await this.#pool.destroy()
  }
}

/** The answer can overtake the last reports: read what already waits before the port is closed. */
const drain = (port: MessagePort, hear: (report: WorkerReport) => void) => {
  for (let waiting = receiveMessageOnPort(port); waiting; waiting = receiveMessageOnPort(port)) hear(waiting.message)
}

const endedError = (end: TaskEnd, cause?: unknown) =>
  new TaskEndedError(
    end,
    end === 'time-limit' ? 'The computation passed its time limit.' : 'The computation was stopped.',
    cause,
  )

const textOf = (error: unknown) => (error instanceof Error ? error.message : String(error))
