import type { ParameterSet } from '../../shared/schemas/parameter-set'
import { toPerson } from './account-answer'

interface Person {
  id: string
  name: string
}

interface SetRow {
  id: string
  name: string
  latestVersion: number
  updatedAt: Date
}

interface VersionRow {
  version: number
  contentHash: string
  note: string
  createdAt: Date
  createdBy: Person
}

const toSet = (set: SetRow) => ({
  id: set.id,
  name: set.name,
  latestVersion: set.latestVersion,
  updatedAt: set.updatedAt.toISOString(),
})

export const toSetListItem = (set: SetRow & { createdBy: Person }) => ({
  ...toSet(set),
  createdBy: toPerson(set.createdBy),
})

export const toVersionItem = (row: VersionRow) => ({
  version: row.version,
  contentHash: row.contentHash,
  note: row.note,
  createdAt: row.createdAt.toISOString(),
  createdBy: toPerson(row.createdBy),
})

export const toVersion = (row: VersionRow & { parameters: ParameterSet }) => ({
  ...toVersionItem(row),
  parameters: row.parameters,
})

export const toSetDetail = (set: SetRow & { version: VersionRow & { parameters: ParameterSet } }) => ({
  ...toSet(set),
  version: toVersion(set.version),
})
