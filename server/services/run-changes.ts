import { notify } from '../database/notifications'
import { updateRun, type RunRow, type RunValues } from '../database/repositories/runs.repository'
import { takeTurn } from '../database/repositories/queue-turns.repository'
import type { TransactionClient } from '../database/transaction'
import type { GroupTx } from '../database/with-group'
import { queue } from '../jobs/queue'
import { toRunEvent } from './run-answer'

/** One transaction that named its group. */
export interface GroupTransaction {
  tx: GroupTx
  client: TransactionClient
}

/** Tells every process, and through them every open page, how the run stands once the transaction commits. */
export const announce = (client: TransactionClient, run: RunRow): Promise<void> =>
  notify(client, 'run', { groupId: run.groupId, ...toRunEvent(run), at: run.changedAt.getTime() })

export const change = async ({ tx, client }: GroupTransaction, run: RunRow, values: RunValues): Promise<RunRow> => {
  const changed = await updateRun(tx, run.groupId, run.id, values)
  if (!changed) throw new Error(`run ${run.id}: expected the row that was locked; found none`)
  await announce(client, changed)
  return changed
}

/** Values of a run that waits again. */
const waitingAgain = {
  state: 'queued',
  progress: 0,
  secondsLeft: null,
  startedAt: null,
  finishedAt: null,
  failure: null,
  cancelRequested: false,
} as const satisfies RunValues

/** Gives the run an entry at the end of its group's turns. */
export const enqueue = async (
  { tx, client }: GroupTransaction,
  run: RunRow,
  waiting: number,
  values: RunValues = {},
): Promise<RunRow> => {
  const turn = await takeTurn(tx, run.groupId, waiting)
  const jobId = await queue.send(client, 'simulate', { groupId: run.groupId, runId: run.id }, { turn })
  const changed = await change({ tx, client }, run, { ...waitingAgain, ...values, jobId })
  await notify(client, 'queued', {})
  return changed
}

/** Puts a run that had its turn already back at the front, with a new entry in place of its old one. */
export const requeue = async (
  { tx, client }: GroupTransaction,
  run: RunRow,
  values: RunValues = {},
  delaySeconds = 0,
): Promise<RunRow> => {
  if (run.jobId) await queue.withdraw(client, 'simulate', run.jobId)
  const payload = { groupId: run.groupId, runId: run.id }
  const jobId = await queue.send(client, 'simulate', payload, { turn: 0, delaySeconds })
  const changed = await change({ tx, client }, run, { ...waitingAgain, ...values, jobId })
  await notify(client, 'queued', {})
  return changed
}

/** An equal computation is stored already: the run is done without computing anything. */
export const link = (
  transaction: GroupTransaction,
  run: RunRow,
  resultId: string,
  values: RunValues = {},
): Promise<RunRow> =>
  change(transaction, run, {
    ...values,
    state: 'done',
    progress: 1,
    secondsLeft: null,
    resultId,
    failure: null,
    cancelRequested: false,
    finishedAt: 'now',
  })
