import { existsSync, readdirSync, readFileSync, readlinkSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'

/** Killed, but not yet collected by its parent: in a container whose first process collects nobody, for ever. */
const isZombie = (pid) => {
  try {
    return /^State:\s+Z/m.test(readFileSync(`/proc/${pid}/status`, 'utf8'))
  } catch {
    return false
  }
}

const worksIn = (folder) => (pid) => {
  try {
    return readlinkSync(`/proc/${pid}/cwd`) === folder
  } catch {
    return false
  }
}

/**
 * Clears the way after a server was killed. PostgreSQL takes a dead but uncollected process for a living one and would
 * never start again; its pid file is removed, but only when none of that server's children is left either.
 */
export const clearAftermath = async (data) => {
  const file = join(data, 'postmaster.pid')
  if (!existsSync(file)) return
  const pid = Number(readFileSync(file, 'utf8').split('\n')[0])
  if (!isZombie(pid)) return
  for (let waited = 0; waited < 10_000; waited += 100) {
    const children = readdirSync('/proc')
      .filter((name) => /^\d+$/.test(name))
      .filter(worksIn(data))
    if (children.length === 0) {
      rmSync(file, { force: true })
      return
    }
    await pause(100)
  }
  throw new Error(`the server of ${data} was killed, but processes of it still run there; end them first`)
}
