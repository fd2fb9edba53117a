import { spawn, type ChildProcess } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { projectRoot } from '../../support/server'

/** Times of the queue that make a test short without making it blind: everything in the proportions of the real ones. */
export const quickTimes = {
  LINEWRIGHT_HEARTBEAT_MS: '300',
  LINEWRIGHT_HEARTBEAT_STALE_MS: '1200',
  LINEWRIGHT_RESCUE_MS: '200',
  LINEWRIGHT_STOP_GRACE_MS: '300',
  LINEWRIGHT_WORKER_THREADS: '1',
  LOG_LEVEL: 'info',
}

export interface WorkerProcess {
  process: ChildProcess
  pid: number
  output: () => string
  /** Exit code, or the signal that ended it. */
  ended: Promise<number | NodeJS.Signals | null>
  kill: (signal: NodeJS.Signals) => void
}

/** The built queue process, as `npm run worker` starts it. */
export const startWorker = (env: Record<string, string>): WorkerProcess => {
  const child = spawn(process.execPath, [join(projectRoot, '.output/server/workers/queue.mjs')], {
    stdio: ['ignore', 'pipe', 'pipe'],
    env: { PATH: process.env.PATH, NODE_ENV: 'production', ...quickTimes, ...env },
  })
  let text = ''
  for (const stream of [child.stdout, child.stderr]) stream.on('data', (part: Buffer) => (text += part.toString()))
  const ended = new Promise<number | NodeJS.Signals | null>((done) =>
    child.once('exit', (code, signal) => done(signal ?? code)),
  )
  return { process: child, pid: child.pid ?? 0, output: () => text, ended, kill: (signal) => void child.kill(signal) }
}

/** Milliseconds of processor time that a process has used, all threads together. */
export const cpuMsOf = (pid: number): number => {
  const fields = readFileSync(`/proc/${pid}/stat`, 'utf8').split(') ')[1]?.split(' ') ?? []
  // utime and stime, in ticks of 10 ms.
  return (Number(fields[11]) + Number(fields[12])) * 10
}
