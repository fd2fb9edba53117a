import { readFile } from 'node:fs/promises'
import { AppError } from '../../shared/errors/app-error'
import { errorCodes, type ErrorCode } from '../../shared/errors/codes'
import { fromBytes } from '../../shared/measurement/byte-source'
import { doTableTask } from '../../shared/measurement/do-table-task'
import type { TableProposal, TableReading } from '../../shared/schemas/measurement'
import type { StoredSpectrum, TableAnswer, TableTask } from '../../shared/schemas/table-messages'
import { TaskEndedError } from '../jobs/pool'
import { readTableInThread, TablePoolFullError } from '../jobs/table-pool'
import { getFileStore } from '../storage/current'

/** A table of this size is read within a few milliseconds; anything larger would keep other requests waiting. */
const inlineBytes = 16 * 1024

/** How a thread that used up its heap ends. */
const isOutOfMemory = (cause: unknown): boolean =>
  cause instanceof Error && 'code' in cause && cause.code === 'ERR_WORKER_OUT_OF_MEMORY'

const refusalOf = (ended: TaskEndedError): Error => {
  if (ended.end === 'stopped') return new AppError('service/unavailable', { cause: ended })
  if (ended.end === 'time-limit')
    return new AppError('measurement/unreadable', {
      detail: 'The file could not be read within 30 seconds; expected a table of numbers.',
      cause: ended,
    })
  if (isOutOfMemory(ended.cause))
    return new AppError('measurement/unreadable', {
      detail: 'The file needs more memory to be read than a table of numbers does.',
      cause: ended,
    })
  // Not the file's fault: the thread could not work at all.
  return ended
}

const inThread = async (path: string, work: TableTask): Promise<TableAnswer> => {
  try {
    return await readTableInThread(path, work)
  } catch (error) {
    if (error instanceof TablePoolFullError) throw new AppError('service/unavailable', { cause: error })
    throw error instanceof TaskEndedError ? refusalOf(error) : error
  }
}

const work = (storageKey: string, byteLength: number, task: TableTask): Promise<TableAnswer> =>
  getFileStore().withFile(storageKey, async (path) =>
    byteLength <= inlineBytes ? doTableTask(fromBytes(await readFile(path)), task) : inThread(path, task),
  )

const settled = async (storageKey: string, byteLength: number, task: TableTask) => {
  const answer = await work(storageKey, byteLength, task)
  if (answer.ok) return answer
  const code = answer.code in errorCodes ? (answer.code as ErrorCode) : 'measurement/unreadable'
  throw new AppError(code, { detail: answer.message, issues: answer.issues })
}

interface Stored {
  storageKey: string
  byteLength: number
}

const proposalOf = async (file: Stored, task: TableTask): Promise<TableProposal> => {
  const answer = await settled(file.storageKey, file.byteLength, task)
  if (!('proposal' in answer)) throw new Error('expected a proposal from the reader; found a spectrum')
  return answer.proposal
}

/** What the reader understands of a stored file on its own. */
export const proposeReading = (file: Stored): Promise<TableProposal> => proposalOf(file, { task: 'propose' })

/** What a corrected reading makes of it. */
export const proposeCorrected = (
  file: Stored,
  reading: TableReading,
  answered: (keyof TableReading)[],
): Promise<TableProposal> => proposalOf(file, { task: 'proposeWith', reading, answered })

/** The numbers, under a confirmed reading. */
export const readSpectrum = async (file: Stored, reading: TableReading): Promise<StoredSpectrum> => {
  const answer = await settled(file.storageKey, file.byteLength, { task: 'read', reading })
  if (!('spectrum' in answer)) throw new Error('expected a spectrum from the reader; found a proposal')
  return answer.spectrum
}
