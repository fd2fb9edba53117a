import { nameGroup, withGroup } from '../database/with-group'
import {
  createAttempt,
  lockAttempt,
  removeAttempt,
  touchAttempt,
} from '../database/repositories/run-attempts.repository'
import { serveTurn } from '../database/repositories/queue-turns.repository'
import {
  findResultId,
  lockComputation,
  storeResult,
  type StoredArray,
} from '../database/repositories/results.repository'
import {
  findRequesterRole,
  getParameters,
  listTwins,
  lockRun,
  updateProgress,
  type RunRow,
} from '../database/repositories/runs.repository'
import { getDatabase } from '../database/client'
import { queue } from '../jobs/queue'
import type { JobEntry, JobTransaction } from '../jobs/registry'
import { ENGINE_VERSION } from '../../shared/engine/engine-version'
import { errorCodes, type ErrorCode } from '../../shared/errors/codes'
import type { ParameterSet } from '../../shared/schemas/parameter-set'
import { isAtLeast } from '../../shared/schemas/roles'
import type { RunJob, RunSummary } from '../../shared/schemas/run'
import { limits } from '../../shared/utils/limits'
import { announce, change, link, requeue, type GroupTransaction } from './run-changes'
import { inputHashOf } from './run-inputs'

/** What a process needs to compute a run that it owns. `attempt` is the token that every later write must show. */
export interface RunClaim {
  groupId: string
  runId: string
  jobId: string
  attempt: number
  parameters: ParameterSet
}

export interface Failure {
  code: ErrorCode
  message: string
}

/** Seconds after which a run looks again whether the equal one that is being computed has ended. */
const twinDelaySeconds = 2

const noRole: Failure = {
  code: 'group/role',
  message: 'The person who asked for this run may no longer start runs in this group.',
}

/** Rights are looked at again when a run starts and when it is stored: they may have changed since it was asked for. */
const mayRun = async ({ tx }: GroupTransaction, run: RunRow): Promise<boolean> => {
  const role = await findRequesterRole(tx, run.groupId, run.requestedBy)
  return role !== null && isAtLeast(role, 'editor')
}

const endFailed = (transaction: GroupTransaction, run: RunRow, failure: Failure): Promise<RunRow> =>
  change(transaction, run, { state: 'failed', failure, secondsLeft: null, finishedAt: 'now' })

/** Makes a waiting run this process's own. Null when there is nothing to compute: the entry is used up. */
export const claimRun = async (
  { tx, client }: JobTransaction,
  { id: jobId, turn, payload }: JobEntry<RunJob>,
  workerId: string,
): Promise<RunClaim | null> => {
  const { groupId, runId } = payload
  await nameGroup(client, groupId)
  const run = await lockRun(tx, groupId, runId)
  // Cancelled, or queued anew since: another entry speaks for the run now.
  if (run?.state !== 'queued' || run.jobId !== jobId) return null
  if (!(await mayRun({ tx, client }, run))) {
    await endFailed({ tx, client }, run, noRole)
    return null
  }
  const parameters = await getParameters(tx, groupId, run.setVersionId)
  // An engine that came with an update computes what it will say it computed.
  const inputHash = run.engineVersion === ENGINE_VERSION ? run.inputHash : inputHashOf(parameters)
  const input = { inputHash, engineVersion: ENGINE_VERSION }
  await lockComputation(tx, groupId, inputHash)
  const resultId = await findResultId(tx, groupId, inputHash)
  if (resultId) {
    await link({ tx, client }, run, resultId, input)
    return null
  }
  const twins = await listTwins(tx, groupId, inputHash)
  if (twins.some((twin) => twin.id !== run.id && twin.state === 'running')) {
    await requeue({ tx, client }, run, input, twinDelaySeconds)
    return null
  }
  const attempt = run.attempt + 1
  await createAttempt(tx, { runId, groupId, jobId, attempt, workerId })
  await serveTurn(tx, groupId, turn)
  await change({ tx, client }, run, {
    ...input,
    state: 'running',
    attempt,
    progress: 0,
    secondsLeft: null,
    startedAt: 'now',
  })
  return { groupId, runId, jobId, attempt, parameters }
}

/** A run whose entry could not even be claimed. */
export const refuseRun = async ({ tx, client }: JobTransaction, payload: RunJob, failure: Failure): Promise<void> => {
  await nameGroup(client, payload.groupId)
  const run = await lockRun(tx, payload.groupId, payload.runId)
  if (run?.state === 'queued') await endFailed({ tx, client }, run, failure)
}

/** True while the attempt owns its run. */
export const keepAlive = (claim: RunClaim): Promise<boolean> => touchAttempt(getDatabase(), claim.runId, claim.attempt)

/** False when the attempt no longer owns its run. */
export const recordProgress = (
  { groupId, runId, attempt }: RunClaim,
  progress: number,
  secondsLeft: number | null,
): Promise<boolean> =>
  withGroup(groupId, async (tx, client) => {
    const run = await updateProgress(tx, groupId, runId, { attempt, progress, secondsLeft })
    if (run) await announce(client, run)
    return run !== null
  })

/**
 * Ends an attempt, when it still owns its run: entry, attempt row and what `end` writes, in one transaction. An attempt
 * that lost its run (cancelled, or taken over while this process was frozen) writes nothing and gets false.
 */
const endAttempt = (
  claim: RunClaim,
  end: (transaction: GroupTransaction, run: RunRow) => Promise<unknown>,
): Promise<boolean> =>
  withGroup(claim.groupId, async (tx, client) => {
    const run = await lockRun(tx, claim.groupId, claim.runId)
    if (!run || run.state !== 'running' || run.attempt !== claim.attempt) return false
    if ((await lockAttempt(tx, claim.runId, claim.attempt)) === null) return false
    await removeAttempt(tx, claim.runId)
    await queue.complete(client, 'simulate', claim.jobId)
    await end({ tx, client }, run)
    return true
  })

export const finishRun = (
  claim: RunClaim,
  answer: { summary: RunSummary; arrays: StoredArray[]; computeMs: number },
): Promise<boolean> =>
  endAttempt(claim, async (transaction, run) => {
    if (!(await mayRun(transaction, run))) return endFailed(transaction, run, noRole)
    const resultId = await storeResult(transaction.tx, {
      groupId: run.groupId,
      inputHash: run.inputHash,
      engineVersion: run.engineVersion,
      summary: answer.summary,
      arrays: answer.arrays,
    })
    return link(transaction, run, resultId, { computeMs: answer.computeMs })
  })

export const failRun = (claim: RunClaim, failure: Failure): Promise<boolean> =>
  endAttempt(claim, (transaction, run) => endFailed(transaction, run, failure))

/** Hands a run back because this process ends. It waits again, at the front. */
export const returnRun = (claim: RunClaim): Promise<boolean> =>
  endAttempt(claim, (transaction, run) => requeue(transaction, run))

const loseAttempt = (transaction: GroupTransaction, run: RunRow): Promise<RunRow> => {
  const losses = run.losses + 1
  if (losses < limits.runLosses) return requeue(transaction, run, { losses })
  return change(transaction, run, {
    losses,
    state: 'failed',
    failure: { code: 'run/worker-lost', message: errorCodes['run/worker-lost'].title },
    secondsLeft: null,
    finishedAt: 'now',
  })
}

/** The thread died under the run. Another try, unless that happened too often. */
export const loseRun = (claim: RunClaim): Promise<boolean> => endAttempt(claim, loseAttempt)

/** The same, found out by another process; `isLost` judges the silence again under the lock. */
export const rescueRun = (
  attempt: { groupId: string; runId: string; attempt: number; jobId: string },
  isLost: (silentMs: number) => boolean,
): Promise<boolean> =>
  withGroup(attempt.groupId, async (tx, client) => {
    await client.query(`set local lock_timeout = '1s'`)
    const run = await lockRun(tx, attempt.groupId, attempt.runId)
    const silentMs = await lockAttempt(tx, attempt.runId, attempt.attempt)
    if (silentMs === null || !isLost(silentMs)) return false
    await removeAttempt(tx, attempt.runId)
    await queue.withdraw(client, 'simulate', attempt.jobId)
    if (run?.state === 'running' && run.attempt === attempt.attempt) await loseAttempt({ tx, client }, run)
    return true
  })
