import { drizzle } from 'drizzle-orm/node-postgres'
import type { PoolClient, QueryResult, QueryResultRow } from 'pg'
import { logger } from '../utils/logger'
import { getPool, type Queries } from './client'
import { assertNoOpenTransaction, insideTransaction } from './open-transaction'
import * as schema from './schema'

/** Handle of one open transaction; dead as soon as the transaction is over. */
export type Transaction = Queries

/** The plain driver inside the same transaction, for packages that bring their own SQL (the queue). */
export interface TransactionClient {
  query<Row extends QueryResultRow>(text: string, values?: unknown[]): Promise<QueryResult<Row>>
}

/** A handle kept past its transaction would run its queries alone, and on a client that someone else holds by then. */
class GuardedClient {
  #over = false
  constructor(private readonly client: PoolClient) {}

  query(...parameters: unknown[]): unknown {
    if (this.#over) throw new Error('expected a query inside the transaction; found one after its end')
    return Reflect.apply(this.client.query, this.client, parameters)
  }

  end(): void {
    this.#over = true
  }
}

const rollBack = async (client: PoolClient): Promise<Error | undefined> => {
  try {
    await client.query('rollback')
    return undefined
  } catch (error) {
    return error instanceof Error ? error : new Error(String(error))
  }
}

/**
 * BEGIN, the work, COMMIT; ROLLBACK when it throws. The client goes back to the pool in every case, also when BEGIN
 * fails, and is thrown away when its state is unknown.
 */
export const withTransaction = async <T>(
  work: (transaction: Transaction, client: TransactionClient) => Promise<T>,
  options: { prepare?: (client: PoolClient) => Promise<unknown> } = {},
): Promise<T> => {
  assertNoOpenTransaction()
  const client = await getPool().connect()
  const guarded = new GuardedClient(client)
  let broken: Error | undefined
  // The pool listens only to its idle clients; one lost between two queries of a transaction would end the process.
  const onLost = (error: Error) => {
    broken = error
    logger.warn({ event: 'database.client-lost', reason: error.message })
  }
  client.on('error', onLost)
  try {
    await client.query('begin')
    await options.prepare?.(client)
    const handle = drizzle(guarded as unknown as PoolClient, { schema })
    const result = await insideTransaction(() => work(handle, guarded as TransactionClient))
    guarded.end()
    await client.query('commit')
    return result
  } catch (error) {
    guarded.end()
    broken = (await rollBack(client)) ?? broken
    throw error
  } finally {
    client.removeListener('error', onLost)
    client.release(broken)
  }
}
