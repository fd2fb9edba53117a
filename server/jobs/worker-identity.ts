import { randomUUID } from 'node:crypto'
import { readFileSync, readlinkSync } from 'node:fs'
import { hostname } from 'node:os'

/**
 * Process ids mean something only within one boot of one machine and one process namespace. With that as its prefix, an
 * id lets a neighbour tell at once that its owner is dead, instead of waiting for its heartbeat to grow old.
 */
const readPlace = (): string | undefined => {
  try {
    const boot = readFileSync('/proc/sys/kernel/random/boot_id', 'utf8').trim()
    const namespace = /\d+/.exec(readlinkSync('/proc/self/ns/pid'))?.[0]
    return namespace ? `${boot}.${namespace}` : undefined
  } catch {
    return undefined
  }
}

const place = readPlace()

/** Unique for each process that ever ran. */
export const workerId = [place ?? hostname(), process.pid, randomUUID().slice(0, 8)].join('/')

const isAlive = (pid: number): boolean => {
  try {
    process.kill(pid, 0)
    return true
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM'
  }
}

/** True only when it is certain: the process ran here, in this boot, and no process has its number now. */
export const isKnownDead = (otherId: string): boolean => {
  const [otherPlace, pid, rest] = otherId.split('/')
  if (place === undefined || otherPlace !== place || !pid || !rest || otherId === workerId) return false
  // A number that this very process carries now belonged to its predecessor.
  if (Number(pid) === process.pid) return true
  return !isAlive(Number(pid))
}
