import { and, eq, sql } from 'drizzle-orm'
import type { ArrayDescription, RunSummary } from '../../../shared/schemas/run'
import { resultArrays, results, runs } from '../schema'
import type { GroupTx } from '../with-group'

export interface StoredArray extends ArrayDescription {
  bytes: Buffer
}

/** Bytes of one INSERT: each statement stays far below the statement time limit. */
const insertBytes = 2 * 1024 * 1024
const insertRows = 200

export const findResultId = async (tx: GroupTx, groupId: string, inputHash: string): Promise<string | null> => {
  const [row] = await tx
    .select({ id: results.id })
    .from(results)
    .where(and(eq(results.groupId, groupId), eq(results.inputHash, inputHash)))
  return row?.id ?? null
}

/** One computation at a time of this input in this group, until the transaction ends. */
export const lockComputation = async (tx: GroupTx, groupId: string, inputHash: string): Promise<void> => {
  await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${`${groupId}/${inputHash}`}, 0))`)
}

/** Stores a result and its arrays, or finds the equal one that is already there. */
export const storeResult = async (
  tx: GroupTx,
  values: { groupId: string; inputHash: string; engineVersion: string; summary: RunSummary; arrays: StoredArray[] },
): Promise<string> => {
  const { arrays, ...result } = values
  const [created] = await tx.insert(results).values(result).onConflictDoNothing().returning({ id: results.id })
  if (!created) {
    const existing = await findResultId(tx, values.groupId, values.inputHash)
    if (!existing) throw new Error(`result ${values.inputHash}: expected the row that made the insert do nothing`)
    return existing
  }
  for (const batch of batches(arrays)) {
    await tx
      .insert(resultArrays)
      .values(batch.map((array) => ({ ...array, groupId: values.groupId, resultId: created.id })))
  }
  return created.id
}

function* batches(arrays: StoredArray[]): Generator<StoredArray[]> {
  let batch: StoredArray[] = []
  let bytes = 0
  for (const array of arrays) {
    if (batch.length > 0 && (bytes + array.bytes.byteLength > insertBytes || batch.length >= insertRows)) {
      yield batch
      batch = []
      bytes = 0
    }
    batch.push(array)
    bytes += array.bytes.byteLength
  }
  if (batch.length > 0) yield batch
}

export const findArray = async (
  tx: GroupTx,
  groupId: string,
  runId: string,
  key: string,
): Promise<StoredArray | null> => {
  const [row] = await tx
    .select({
      key: resultArrays.key,
      dataType: resultArrays.dataType,
      shape: resultArrays.shape,
      unit: resultArrays.unit,
      sha256: resultArrays.sha256,
      bytes: resultArrays.bytes,
    })
    .from(runs)
    .innerJoin(resultArrays, eq(resultArrays.resultId, runs.resultId))
    .where(
      and(eq(runs.groupId, groupId), eq(runs.id, runId), eq(resultArrays.groupId, groupId), eq(resultArrays.key, key)),
    )
  return row ?? null
}
