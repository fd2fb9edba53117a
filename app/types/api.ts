/** Answers of the server, as the pages read them. Dates are ISO texts. */
import type { ParameterSet } from '#shared/schemas/parameter-set'
import type { Role } from '#shared/schemas/roles'
import type { RunState, RunSummary } from '#shared/schemas/run'
import type { Issue } from '#shared/errors/app-error'

export interface Person {
  id: string
  name: string
}

export interface User extends Person {
  email: string
}

export interface GroupRef {
  id: string
  name: string
  role: Role
  isDemo: boolean
}

export interface SessionAnswer {
  user: User | null
  groups: GroupRef[]
}

export interface GroupDetail extends GroupRef {
  members: (Person & { role: Role })[]
  counts: { sets: number; runs: number; measurements: number }
}

export interface SessionRecord {
  id: string
  current: boolean
  createdAt: string
  lastSeenAt: string
  userAgent?: string | null
}

export interface SetListItem {
  id: string
  name: string
  latestVersion: number
  updatedAt: string
  createdBy: Person
}

export interface SetVersion {
  version: number
  parameters: ParameterSet
  contentHash: string
  note: string
  createdAt: string
  createdBy: Person
}

export type SetVersionItem = Omit<SetVersion, 'parameters'>

export interface SetDetail {
  id: string
  name: string
  latestVersion: number
  updatedAt: string
  version: SetVersion
}

export interface Run {
  id: string
  state: RunState
  progress: number
  secondsLeft: number | null
  attempt: number
  queuePlace?: number | null
  failure: { code: string; message: string; issues?: Issue[] } | null
  engineVersion: string
  inputHash: string
  set: { id: string; name: string; version: number }
  requestedBy: Person
  queuedAt: string
  startedAt: string | null
  finishedAt: string | null
  computeMs: number | null
  summary: RunSummary | null
}

/** One message of the group's event stream. */
export type RunEvent = Pick<Run, 'id' | 'state' | 'progress' | 'secondsLeft'>
