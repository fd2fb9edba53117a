import type { TableAnswer, TableTask } from '../../shared/schemas/table-messages'
import { ThreadPool } from './pool'

/** One thread beside those of the runs: reading a table must not wait for a run of an hour, and takes seconds itself. */
const threads = 1
const heapMb = 512
const limitMs = 30_000
const graceMs = 1000
/** Requests that may wait for the thread; each of them holds a connection. */
const maxWaiting = 64

let pool: ThreadPool | undefined
let busy = 0
const waiting: (() => void)[] = []

/** More tables are being read than anybody should wait for. */
export class TablePoolFullError extends Error {
  constructor() {
    super(`expected at most ${maxWaiting} tables waiting to be read; found one more`)
    this.name = 'TablePoolFullError'
  }
}

const enter = async (): Promise<void> => {
  if (busy < threads) {
    busy += 1
    return
  }
  if (waiting.length >= maxWaiting) throw new TablePoolFullError()
  // The place is handed over by the one who leaves, so that nobody slips in between.
  await new Promise<void>((resolve) => waiting.push(resolve))
}

const leave = (): void => {
  const next = waiting.shift()
  if (next) next()
  else busy -= 1
}

/** Does one task on a local file in a thread, bounded in time and memory. */
export const readTableInThread = async (path: string, work: TableTask): Promise<TableAnswer> => {
  await enter()
  try {
    pool ??= new ThreadPool({ threads, heapMb })
    return await pool.run<TableAnswer>({ entry: 'table', input: { path, work }, limitMs, graceMs })
  } finally {
    leave()
  }
}

export const closeTablePool = async (): Promise<void> => {
  const closing = pool
  pool = undefined
  await closing?.destroy()
}
