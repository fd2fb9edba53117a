import { withTransaction, type Transaction, type TransactionClient } from './transaction'

/** Handle of a transaction that sees the rows of one group only. */
export type GroupTx = Transaction & { readonly __group?: never }

/** For a transaction that learns its group only on the way, like one that takes a job from the queue. */
export const nameGroup = (client: Pick<TransactionClient, 'query'>, groupId: string): Promise<unknown> =>
  client.query(`select set_config('app.group_id', $1, true)`, [groupId])

/**
 * A transaction that named its group: row level security shows it the rows of that group and no others. Queries filter
 * by group id as well; this is the second fence. The setting is local to the transaction and dies with it.
 */
export const withGroup = <T>(
  groupId: string,
  work: (tx: GroupTx, client: TransactionClient) => Promise<T>,
): Promise<T> =>
  withTransaction(work, {
    prepare: (client) => nameGroup(client as Pick<TransactionClient, 'query'>, groupId),
  })
