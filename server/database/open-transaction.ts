import { AsyncLocalStorage } from 'node:async_hooks'

/**
 * Knows whether the current call chain holds a transaction. A second client taken inside one would wait for the pool
 * while holding a client of it: with every client doing so, nothing moves again.
 */
const current = new AsyncLocalStorage<{ open: boolean }>()

export const assertNoOpenTransaction = (): void => {
  if (current.getStore()?.open) {
    throw new Error('expected every query of a transaction to use its own handle; found a second client being taken')
  }
}

export const insideTransaction = async <T>(work: () => Promise<T>): Promise<T> => {
  const mark = { open: true }
  try {
    return await current.run(mark, work)
  } finally {
    mark.open = false
  }
}
