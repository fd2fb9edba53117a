import { spawn } from 'node:child_process'
import { setTimeout as pause } from 'node:timers/promises'
import { projectRoot } from './paths.mjs'

/** Longer than the server's own limit for ending its requests and runs, so that it is ended by force only when it hangs. */
const graceMs = 12_000

/**
 * Keeps a program of ours running: starts it again when it ends by itself with an error (an uncaught exception drains
 * and exits), gives up when that happens five times within a minute, and ends it on SIGINT and SIGTERM.
 * @param {{ args: string[], env: Record<string, string | undefined>, name: string, onStart?: () => Promise<void> | void }} program
 * @returns {Promise<number>} the exit code to leave with
 */
export const supervise = async ({ args, env, name, onStart }) => {
  let child
  let stopping = false
  const stop = () => {
    if (stopping) return
    stopping = true
    child?.kill('SIGTERM')
    setTimeout(() => child?.kill('SIGKILL'), graceMs).unref()
  }
  process.on('SIGINT', stop)
  process.on('SIGTERM', stop)
  const failures = []
  try {
    for (;;) {
      child = spawn(process.execPath, args, { cwd: projectRoot, env: { ...process.env, ...env }, stdio: 'inherit' })
      const ended = new Promise((resolve) => {
        child.once('error', (error) => resolve({ code: 1, why: error.message }))
        child.once('exit', (code, signal) => resolve({ code: code ?? 1, why: signal ?? `code ${code}` }))
      })
      if (onStart) void Promise.resolve(onStart(child, ended)).catch((error) => console.error(error.message))
      const { code, why } = await ended
      if (stopping) return code === 0 || why === 'SIGTERM' || why === 'SIGINT' ? 0 : 1
      if (code === 0) return 0
      const now = performance.now()
      failures.push(now)
      while (failures[0] < now - 60_000) failures.shift()
      if (failures.length >= 5) {
        console.error(`The ${name} ended five times within a minute (last: ${why}); giving up.`)
        return 1
      }
      const delay = 500 * 2 ** (failures.length - 1)
      console.error(`The ${name} ended with ${why}; starting it again in ${delay / 1000} s.`)
      await pause(delay)
      if (stopping) return 0
    }
  } finally {
    process.off('SIGINT', stop)
    process.off('SIGTERM', stop)
  }
}
