import type { FileStore } from './file-store'

let current: FileStore | undefined

/** Chooses the store of this process, once, at its start. */
export const useFileStore = (store: FileStore): void => {
  current = store
}

export const getFileStore = (): FileStore => {
  if (current === undefined) throw new Error('expected a file store chosen at the start of the process; found none')
  return current
}
