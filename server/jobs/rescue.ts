import { performance } from 'node:perf_hooks'
import { setTimeout as sleep } from 'node:timers/promises'
import { getDatabase } from '../database/client'
import { databaseCodeOf, isDatabaseDown } from '../database/outage'
import { listAttempts, type AttemptRow } from '../database/repositories/run-attempts.repository'
import { rescueRun } from '../services/run-execution.service'
import { reconcileRuns } from '../services/run-reconcile.service'
import { logger } from '../utils/logger'
import type { JobSettings } from './settings'
import { isKnownDead } from './worker-identity'

/** Compares the runs with the queue this often; the two can only differ after a restore or a hand-made change. */
const reconcileMs = 10 * 60 * 1000

const lockNotAvailable = '55P03'

/** A process that froze in the middle of a transaction may still hold the run's row: that run is left for the next look. */
const rescue = async (attempt: AttemptRow, isLost: (silentMs: number) => boolean): Promise<void> => {
  try {
    if (!(await rescueRun(attempt, isLost))) return
    logger.warn({ event: 'run.rescued', runId: attempt.runId, attempt: attempt.attempt, worker: attempt.workerId })
  } catch (error) {
    if (databaseCodeOf(error) !== lockNotAvailable) throw error
  }
}

/**
 * Looks for attempts whose process is gone. After an outage of the database every heartbeat is old although everybody
 * lives, so silence counts only once this process has seen the database without a gap for longer than two heartbeats.
 */
export const startRescuer = (settings: JobSettings): { stop: () => Promise<void> } => {
  const stopping = new AbortController()
  let seenSince: number | undefined
  let lastLook = 0
  let reconciledAt: number | undefined

  const look = async () => {
    const attempts = await listAttempts(getDatabase())
    const now = performance.now()
    if (seenSince === undefined || now - lastLook > 2 * settings.rescueMs + settings.heartbeatMs) seenSince = now
    lastLook = now
    const silenceCounts = now - seenSince > 2 * settings.heartbeatMs
    for (const attempt of attempts) {
      const dead = isKnownDead(attempt.workerId)
      const isLost = (silentMs: number) => dead || (silenceCounts && silentMs > settings.heartbeatStaleMs)
      if (isLost(attempt.silentMs)) await rescue(attempt, isLost)
    }
    if (reconciledAt === undefined || now - reconciledAt > reconcileMs) {
      await reconcileRuns()
      reconciledAt = now
    }
  }

  const loop = async () => {
    while (!stopping.signal.aborted) {
      try {
        await look()
      } catch (error) {
        seenSince = undefined
        const reason = error instanceof Error ? error.message : String(error)
        if (isDatabaseDown(error)) logger.warn({ event: 'rescue.failed', reason })
        else logger.error({ event: 'rescue.failed', err: error })
      }
      await sleep(settings.rescueMs, undefined, { signal: stopping.signal, ref: false }).catch(() => undefined)
    }
  }
  const looping = loop()
  return {
    stop: async () => {
      stopping.abort()
      await looping
    },
  }
}
