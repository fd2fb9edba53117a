import { getDatabase } from '../database/client'
import { listQueueingGroups } from '../database/repositories/queue-turns.repository'
import { lockAttempt } from '../database/repositories/run-attempts.repository'
import { listUnfinishedRuns, lockRun } from '../database/repositories/runs.repository'
import { withGroup } from '../database/with-group'
import { queue } from '../jobs/queue'
import { logger } from '../utils/logger'
import { requeue } from './run-changes'

/**
 * Gives a new entry to every unfinished run that has lost its own: a waiting run without an entry in the queue, and a
 * running one without an attempt. Normal work cannot produce either; a restored dump can.
 */
export const reconcileRuns = async (): Promise<number> => {
  let mended = 0
  for (const groupId of await listQueueingGroups(getDatabase())) mended += await reconcileGroup(groupId)
  if (mended > 0) logger.warn({ event: 'run.reconciled', runs: mended })
  return mended
}

const reconcileGroup = (groupId: string): Promise<number> =>
  withGroup(groupId, async (tx, client) => {
    const unfinished = await listUnfinishedRuns(tx, groupId, ['queued', 'running'])
    if (unfinished.length === 0) return 0
    const entries = unfinished.flatMap(({ jobId }) => (jobId ? [jobId] : []))
    const missing = await queue.missing(client, 'simulate', entries)
    let mended = 0
    for (const candidate of unfinished) {
      if (candidate.state === 'queued' && candidate.jobId && !missing.has(candidate.jobId)) continue
      // Looked at again under the lock: the run may have gone on in the meantime.
      const run = await lockRun(tx, groupId, candidate.id)
      if (!run || run.state !== candidate.state || run.jobId !== candidate.jobId) continue
      if (run.state === 'running' && (await lockAttempt(tx, run.id, run.attempt)) !== null) continue
      await requeue({ tx, client }, run)
      mended += 1
    }
    return mended
  })
