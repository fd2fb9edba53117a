import { performance } from 'node:perf_hooks'
import { setTimeout as sleep } from 'node:timers/promises'
import { databaseCodeOf, isDatabaseDown } from '../database/outage'
import { onNotice } from '../database/notifications'
import {
  claimRun,
  failRun,
  finishRun,
  keepAlive,
  loseRun,
  recordProgress,
  refuseRun,
  returnRun,
  type Failure,
  type RunClaim,
} from '../services/run-execution.service'
import { toStoredResult } from '../services/run-results'
import { logger } from '../utils/logger'
import { errorCodes, type ErrorCode } from '../../shared/errors/codes'
import type { RunJob } from '../../shared/schemas/run'
import type { SimulateAnswer } from '../../workers/simulate'
import { TaskEndedError, type ThreadPool } from './pool'
import { ProgressWriter } from './progress-writer'
import type { JobHandler } from './registry'
import type { JobSettings } from './settings'
import { workerId } from './worker-identity'

type StopReason = 'lost' | 'shutdown'

const toFailure = (code: string, message: string): Failure =>
  code in errorCodes ? { code: code as ErrorCode, message } : { code: 'run/failed', message: `${code}: ${message}` }

const messageOf = (error: unknown) => (error instanceof Error ? error.message : String(error))

/** A statement that ran into its own time limit would do so again; everything else of an outage passes. */
const passes = (error: unknown) => isDatabaseDown(error) && databaseCodeOf(error) !== '57014' && !isDiskFull(error)
const isDiskFull = (error: unknown) => databaseCodeOf(error) === '53100'

/** How one attempt is watched: its heartbeat, its progress and everything that may stop it. */
const supervise = (claim: RunClaim, settings: JobSettings, shutdown: AbortSignal) => {
  const stop = new AbortController()
  const stopFor = (reason: StopReason) => stop.abort(reason)
  const log = (event: string, error: unknown) =>
    logger.warn({ event, runId: claim.runId, attempt: claim.attempt, reason: messageOf(error) })

  // Runs in the supervising thread, so it goes on while the computing one is busy, and stops when this process freezes.
  const beat = async () => {
    try {
      if (!(await keepAlive(claim))) stopFor('lost')
    } catch (error) {
      log('run.heartbeat-failed', error)
    }
  }
  const heartbeat = setInterval(() => void beat(), settings.heartbeatMs)
  const progress = new ProgressWriter(async (fraction, secondsLeft) => {
    try {
      if (!(await recordProgress(claim, fraction, secondsLeft))) stopFor('lost')
    } catch (error) {
      log('run.progress-failed', error)
    }
  })
  const offs = [
    onNotice('revoked', ({ runId, attempt }) => {
      if (runId === claim.runId && attempt === claim.attempt) stopFor('lost')
    }),
    // A notice may have been missed, and the heartbeats of an outage are overdue.
    onNotice('reconnected', () => void beat()),
  ]
  const onShutdown = () => stopFor('shutdown')
  if (shutdown.aborted) onShutdown()
  else shutdown.addEventListener('abort', onShutdown, { once: true })

  return {
    signal: stop.signal,
    report: (fraction: number) => progress.report(fraction),
    reason: () => stop.signal.reason as StopReason | undefined,
    stopReporting: () => progress.close(),
    end: async () => {
      clearInterval(heartbeat)
      for (const off of offs) off()
      shutdown.removeEventListener('abort', onShutdown)
      await progress.close()
    },
  }
}

type Watch = ReturnType<typeof supervise>

/** Repeats a write until the database takes it: a finished result outlives an outage. */
const store = async (watch: Watch, shutdown: AbortSignal, write: () => Promise<boolean>): Promise<boolean> => {
  for (let delay = 250; ; delay = Math.min(delay * 2, 5000)) {
    try {
      return await write()
    } catch (error) {
      if (!passes(error) || watch.reason() === 'lost' || shutdown.aborted) throw error
      await sleep(delay, undefined, { ref: false })
    }
  }
}

export const makeSimulateHandler = (pool: ThreadPool, settings: JobSettings): JobHandler<RunJob, RunClaim> => {
  const compute = async (claim: RunClaim, watch: Watch) => {
    let startedAt = performance.now()
    const answer = await pool.run<SimulateAnswer>({
      entry: 'simulate',
      input: { parameters: claim.parameters },
      limitMs: settings.runLimitMs,
      graceMs: settings.stopGraceMs,
      signal: watch.signal,
      onStarted: () => (startedAt = performance.now()),
      onProgress: watch.report,
    })
    return { answer, computeMs: performance.now() - startedAt }
  }

  /** How the attempt ends: the write that says so, or nothing when the run is somebody else's by now. */
  const conclude = async (claim: RunClaim, watch: Watch): Promise<(() => Promise<boolean>) | null> => {
    try {
      const { answer, computeMs } = await compute(claim, watch)
      if (!answer.ok) {
        const failure = toFailure(answer.code, answer.message)
        return () => failRun(claim, failure)
      }
      const result = toStoredResult(answer)
      return () => finishRun(claim, { ...result, computeMs })
    } catch (error) {
      if (!(error instanceof TaskEndedError)) {
        logger.error({ event: 'run.answer-unreadable', runId: claim.runId, err: error })
        const message = 'The computation ended with an answer that could not be read.'
        return () => failRun(claim, { code: 'run/failed', message })
      }
      if (error.end === 'time-limit') {
        const seconds = Math.round(settings.runLimitMs / 1000)
        const message = `The computation passed its time limit of ${seconds} s and was stopped.`
        return () => failRun(claim, { code: 'run/time-limit', message })
      }
      if (error.end === 'lost') {
        logger.warn({ event: 'run.thread-lost', runId: claim.runId, attempt: claim.attempt, reason: error.message })
        return () => loseRun(claim)
      }
      return watch.reason() === 'shutdown' ? () => returnRun(claim) : null
    }
  }

  const work = async (claim: RunClaim, shutdown: AbortSignal): Promise<void> => {
    const watch = supervise(claim, settings, shutdown)
    const entry = { runId: claim.runId, groupId: claim.groupId, attempt: claim.attempt }
    try {
      const write = await conclude(claim, watch)
      // Progress written after the end would be refused anyway, and would look like a lost run.
      await watch.stopReporting()
      if (!write) return void logger.info({ event: 'run.stopped', ...entry })
      try {
        const owned = await store(watch, shutdown, write)
        logger.info({ event: owned ? 'run.ended' : 'run.not-owned', ...entry })
      } catch (error) {
        if (passes(error)) throw error
        logger.error({ event: 'run.not-stored', ...entry, err: error })
        const failure: Failure = isDiskFull(error)
          ? { code: 'storage/full', message: errorCodes['storage/full'].title }
          : { code: 'run/failed', message: 'The result was computed but could not be stored.' }
        await store(watch, shutdown, () => failRun(claim, failure))
      }
    } catch (error) {
      // The attempt's heartbeat stops here, so another process takes the run over.
      logger.error({ event: 'run.abandoned', ...entry, err: error })
    } finally {
      await watch.end()
    }
  }

  return {
    claim: (transaction, entry) => claimRun(transaction, entry, workerId),
    refuse: (transaction, { payload }) =>
      refuseRun(transaction, payload, { code: 'run/failed', message: 'The run could not be started.' }),
    work,
  }
}
