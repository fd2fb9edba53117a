import { closeSync, openSync, readSync } from 'node:fs'
import type { ByteSource } from '../shared/measurement/byte-source'
import { doTableTask } from '../shared/measurement/do-table-task'
import { TableMessageSchema, type TableAnswer } from '../shared/schemas/table-messages'

const pieceBytes = 256 * 1024

/** The file piece by piece, opened again for every pass. Stops between two pieces when asked to. */
const fileSource = (path: string, shouldStop: () => boolean): ByteSource =>
  function* () {
    const file = openSync(path, 'r')
    try {
      const piece = Buffer.allocUnsafe(pieceBytes)
      for (;;) {
        if (shouldStop()) throw new Error('The reading of the file was stopped.')
        const length = readSync(file, piece, 0, pieceBytes, null)
        if (length === 0) return
        yield piece.subarray(0, length)
      }
    } finally {
      closeSync(file)
    }
  }

/** Thread entry: one table in, a proposal or a spectrum out. */
export const table = (message: unknown): TableAnswer => {
  const { path, work, stop, port } = TableMessageSchema.parse(message)
  port.postMessage({ type: 'started' })
  return doTableTask(
    fileSource(path, () => Atomics.load(stop, 0) !== 0),
    work,
  )
}
