import { withGroup } from '../database/with-group'
import { removeAttempt } from '../database/repositories/run-attempts.repository'
import { findArray, findResultId, lockComputation, type StoredArray } from '../database/repositories/results.repository'
import {
  countQueuedRuns,
  createRun as createRunRow,
  findRun,
  findRunnableVersion,
  findSummary,
  getParameters,
  listRuns as listRunRows,
  listTwins,
  lockRun,
  type RunRow,
  type RunValues,
  type RunView,
} from '../database/repositories/runs.repository'
import { notify } from '../database/notifications'
import { queue } from '../jobs/queue'
import { ENGINE_VERSION } from '../../shared/engine/engine-version'
import { AppError } from '../../shared/errors/app-error'
import { limits } from '../../shared/utils/limits'
import { toRun, type RunAnswer } from './run-answer'
import { change, enqueue, link, type GroupTransaction } from './run-changes'
import { assertComputable, inputHashOf } from './run-inputs'

const notFound = () => new AppError('request/not-found')

const placesOf = async ({ client }: GroupTransaction, views: RunView[]): Promise<Map<string, number>> => {
  const waiting = views.flatMap(({ run }) => (run.state === 'queued' && run.jobId ? [run.jobId] : []))
  return queue.places(client, 'simulate', waiting)
}

const answerOne = async (transaction: GroupTransaction, groupId: string, runId: string): Promise<RunAnswer> => {
  const view = await findRun(transaction.tx, groupId, runId)
  if (!view) throw notFound()
  const places = await placesOf(transaction, [view])
  const { resultId, jobId } = view.run
  const summary = resultId ? await findSummary(transaction.tx, groupId, resultId) : null
  return toRun(view, { queuePlace: jobId ? places.get(jobId) : undefined, summary })
}

/** Either links the result that exists already, or gives the run its place in the queue. */
const linkOrEnqueue = async (transaction: GroupTransaction, run: RunRow, values: RunValues = {}): Promise<void> => {
  const resultId = await findResultId(transaction.tx, run.groupId, values.inputHash ?? run.inputHash)
  if (resultId) {
    await link(transaction, run, resultId, values)
    return
  }
  // The run itself may be counted already or not; the limit is not about one.
  const waiting = await countQueuedRuns(transaction.tx, run.groupId)
  if (waiting > limits.queuedRunsPerGroup) {
    throw new AppError('quota/exceeded', {
      detail: `A group may have ${limits.queuedRunsPerGroup} runs waiting; yours has that many.`,
    })
  }
  await enqueue(transaction, run, waiting, values)
}

/**
 * A run of one saved version. The same request made again while the run is unfinished answers that run, so that an
 * impatient second click computes nothing twice.
 */
export const createRun = (input: {
  groupId: string
  userId: string
  setId: string
  version: number
}): Promise<RunAnswer> =>
  withGroup(input.groupId, async (tx, client) => {
    const version = await findRunnableVersion(tx, input.groupId, input.setId, input.version)
    if (!version) throw notFound()
    assertComputable(version.parameters)
    const inputHash = inputHashOf(version.parameters)
    await lockComputation(tx, input.groupId, inputHash)
    const twins = await listTwins(tx, input.groupId, inputHash)
    const same = twins.find((twin) => twin.setVersionId === version.id)
    if (same) return answerOne({ tx, client }, input.groupId, same.id)
    const run = await createRunRow(tx, {
      groupId: input.groupId,
      setVersionId: version.id,
      inputHash,
      engineVersion: ENGINE_VERSION,
      requestedBy: input.userId,
    })
    await linkOrEnqueue({ tx, client }, run)
    return answerOne({ tx, client }, input.groupId, run.id)
  })

export const listRuns = (groupId: string, filter: { setId?: string }): Promise<RunAnswer[]> =>
  withGroup(groupId, async (tx, client) => {
    const views = await listRunRows(tx, groupId, filter)
    const places = await placesOf({ tx, client }, views)
    return views.map((view) => toRun(view, { queuePlace: view.run.jobId ? places.get(view.run.jobId) : undefined }))
  })

export const getRun = (groupId: string, runId: string): Promise<RunAnswer> =>
  withGroup(groupId, (tx, client) => answerOne({ tx, client }, groupId, runId))

/**
 * The run ends here and now, whatever its thread is doing: the attempt loses its ownership in this transaction, so it
 * can store nothing any more, and the process that computes it is told to stop.
 */
export const cancelRun = (groupId: string, runId: string): Promise<RunAnswer> =>
  withGroup(groupId, async (tx, client) => {
    const run = await lockRun(tx, groupId, runId)
    if (!run) throw notFound()
    if (run.state !== 'queued' && run.state !== 'running') throw new AppError('run/not-cancellable')
    if (run.jobId) await queue.withdraw(client, 'simulate', run.jobId)
    await removeAttempt(tx, runId)
    await change({ tx, client }, run, {
      state: 'cancelled',
      cancelRequested: true,
      secondsLeft: null,
      finishedAt: 'now',
    })
    if (run.state === 'running') await notify(client, 'revoked', { runId, attempt: run.attempt })
    return answerOne({ tx, client }, groupId, runId)
  })

/** Queues the same run again, on behalf of the person who asks now. */
export const retryRun = (input: { groupId: string; userId: string; runId: string }): Promise<RunAnswer> =>
  withGroup(input.groupId, async (tx, client) => {
    const run = await lockRun(tx, input.groupId, input.runId)
    if (!run) throw notFound()
    if (run.state !== 'failed' && run.state !== 'cancelled') throw new AppError('run/not-retryable')
    const parameters = await getParameters(tx, input.groupId, run.setVersionId)
    assertComputable(parameters)
    await linkOrEnqueue({ tx, client }, run, {
      losses: 0,
      requestedBy: input.userId,
      engineVersion: ENGINE_VERSION,
      inputHash: inputHashOf(parameters),
    })
    return answerOne({ tx, client }, input.groupId, input.runId)
  })

export const readArray = (groupId: string, runId: string, key: string): Promise<StoredArray> =>
  withGroup(groupId, async (tx) => {
    const array = await findArray(tx, groupId, runId, key)
    if (array) return array
    const view = await findRun(tx, groupId, runId)
    if (view && !view.run.resultId) throw new AppError('run/no-result')
    throw notFound()
  })
