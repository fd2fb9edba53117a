import { AppError } from '../errors/app-error'
import type { TableAnswer, TableTask } from '../schemas/table-messages'
import type { ByteSource } from './byte-source'
import { proposeTable, proposeWith } from './propose-table'
import { readTable } from './read-table'

const work = (source: ByteSource, task: TableTask): TableAnswer => {
  switch (task.task) {
    case 'propose':
      return { ok: true, proposal: proposeTable(source) }
    case 'proposeWith':
      return { ok: true, proposal: proposeWith(source, task.reading, task.answered) }
    case 'read': {
      const { energiesMeV, values, uncertainties } = readTable(source, task.reading)
      return { ok: true, spectrum: { energiesMeV, values, uncertainties } }
    }
  }
}

/** One task on one table; refusals are answers, because an error thrown out of a thread loses its class and fields. */
export const doTableTask = (source: ByteSource, task: TableTask): TableAnswer => {
  try {
    return work(source, task)
  } catch (error) {
    if (!(error instanceof AppError)) throw error
    return { ok: false, code: error.code, message: error.detail, issues: error.issues }
  }
}
