import { mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'

const isAlive = (pid) => {
  try {
    process.kill(pid, 0)
    return true
  } catch (error) {
    return error.code === 'EPERM'
  }
}

const holderOf = (lock) => {
  try {
    return Number(readFileSync(join(lock, 'pid'), 'utf8'))
  } catch {
    return null
  }
}

/** Runs `work` while no other process of this machine holds the same lock folder. A lock left by a dead process is taken over. */
export const withLock = async (lock, work) => {
  const deadline = performance.now() + 120_000
  for (let unnamed = 0; ;) {
    try {
      mkdirSync(lock)
      break
    } catch (error) {
      if (error.code !== 'EEXIST') throw error
    }
    const holder = holderOf(lock)
    // A lock without a name is being taken this moment, or its holder died between two calls.
    unnamed = holder ? 0 : unnamed + 1
    if ((holder && !isAlive(holder)) || unnamed > 50) rmSync(lock, { recursive: true, force: true })
    else if (performance.now() > deadline) throw new Error(`process ${holder} has held ${lock} for two minutes`)
    else await pause(100)
  }
  try {
    writeFileSync(join(lock, 'pid'), String(process.pid))
    return await work()
  } finally {
    rmSync(lock, { recursive: true, force: true })
  }
}
