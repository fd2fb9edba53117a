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

/**
 * Runs `work` while no other process of this machine holds the same lock folder. A lock left by a dead process is taken
 * over; a living one is waited for, up to `patienceMs`.
 */
export const withLock = async (lock, { patienceMs = 120_000 }, work) => {
  const deadline = performance.now() + patienceMs
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
    else if (performance.now() > deadline)
      throw new Error(`process ${holder} still holds ${lock}; waited ${patienceMs / 1000} s`)
    else await pause(100)
  }
  try {
    writeFileSync(join(lock, 'pid'), String(process.pid))
    return await work()
  } finally {
    rmSync(lock, { recursive: true, force: true })
  }
}
