import type { RunRow, RunView } from '../database/repositories/runs.repository'
import type { RunState, RunSummary } from '../../shared/schemas/run'

/** A run as the API shows it. */
export interface RunAnswer {
  id: string
  state: RunState
  progress: number
  secondsLeft: number | null
  attempt: number
  /** 1 = next; only while it waits. */
  queuePlace?: number
  failure: { code: string; message: string } | null
  engineVersion: string
  inputHash: string
  set: { id: string; name: string; version: number }
  requestedBy: { id: string; name: string }
  queuedAt: string
  startedAt: string | null
  finishedAt: string | null
  computeMs: number | null
  /** Null until the run is done, and in lists. */
  summary: RunSummary | null
}

export const toRun = (view: RunView, extra: { queuePlace?: number; summary?: RunSummary | null } = {}): RunAnswer => {
  const { run, set, requestedBy } = view
  return {
    id: run.id,
    state: run.state,
    progress: run.progress,
    secondsLeft: run.secondsLeft,
    attempt: run.attempt,
    ...(extra.queuePlace === undefined ? {} : { queuePlace: extra.queuePlace }),
    failure: run.failure ? { code: run.failure.code, message: run.failure.message } : null,
    engineVersion: run.engineVersion,
    inputHash: run.inputHash,
    set: { id: set.id, name: set.name, version: set.version },
    requestedBy: { id: requestedBy.id, name: requestedBy.name },
    queuedAt: run.queuedAt.toISOString(),
    startedAt: run.startedAt?.toISOString() ?? null,
    finishedAt: run.finishedAt?.toISOString() ?? null,
    computeMs: run.computeMs,
    summary: extra.summary ?? null,
  }
}

/** What an event stream says about a run. */
export interface RunEvent {
  id: string
  state: RunState
  progress: number
  secondsLeft: number | null
}

export const toRunEvent = (run: RunRow): RunEvent => ({
  id: run.id,
  state: run.state,
  progress: run.progress,
  secondsLeft: run.secondsLeft,
})
