import { AppError } from '../../shared/errors/app-error'
import type { ParameterSet } from '../../shared/schemas/parameter-set'
import type { SetRename, SetRequest, SetVersionRequest } from '../../shared/schemas/set-requests'
import { contentHash } from '../../shared/utils/canonical'
import { isReferenceViolation, isUniqueViolation } from '../database/postgres-errors'
import {
  countSets,
  createSet,
  createVersion,
  findSet,
  findSetForUpdate,
  findVersion,
  listSets,
  listVersions,
  removeSet,
  updateSet,
} from '../database/repositories/parameter-sets.repository'
import { withGroup, type GroupTx } from '../database/with-group'

const setsPerGroup = 10_000

const nameTaken = (name: string) =>
  new AppError('object/name-taken', {
    detail: `The group already has a parameter set named "${name}".`,
    issues: [{ path: ['name'], message: 'expected a name that no other parameter set of the group has' }],
  })

/** The database decides whether a name is free: two savers at once cannot both be told that it is. */
const withUniqueName = async <T>(name: string, work: Promise<T>): Promise<T> => {
  try {
    return await work
  } catch (error) {
    throw isUniqueViolation(error) ? nameTaken(name) : error
  }
}

const getSetDetail = async (tx: GroupTx, groupId: string, setId: string) => {
  const set = await findSet(tx, groupId, setId)
  const version = set && (await findVersion(tx, groupId, setId, set.latestVersion))
  if (!version) throw new AppError('request/not-found')
  return { ...set, version }
}

export const listParameterSets = (groupId: string) => withGroup(groupId, (tx) => listSets(tx, groupId))

export const getParameterSet = (groupId: string, setId: string) =>
  withGroup(groupId, (tx) => getSetDetail(tx, groupId, setId))

export const createParameterSet = (groupId: string, userId: string, request: SetRequest) =>
  withUniqueName(
    request.name,
    withGroup(groupId, async (tx) => {
      if ((await countSets(tx, groupId)) >= setsPerGroup) {
        throw new AppError('quota/exceeded', { detail: `A group may hold at most ${setsPerGroup} parameter sets.` })
      }
      const setId = await createSet(tx, groupId, { name: request.name, createdBy: userId })
      await saveVersion(tx, groupId, { setId, version: 1, userId, ...request })
      return getSetDetail(tx, groupId, setId)
    }),
  )

const saveVersion = (
  tx: GroupTx,
  groupId: string,
  save: { setId: string; version: number; userId: string; parameters: ParameterSet; note: string },
): Promise<void> =>
  createVersion(tx, groupId, {
    setId: save.setId,
    version: save.version,
    parameters: save.parameters,
    contentHash: contentHash(save.parameters),
    note: save.note,
    createdBy: save.userId,
  })

/** Saves on top of the version that was edited; refused when somebody saved in between, so that no work is lost unseen. */
export const saveParameterSet = (groupId: string, userId: string, setId: string, request: SetVersionRequest) =>
  withGroup(groupId, async (tx) => {
    const set = await findSetForUpdate(tx, groupId, setId)
    if (!set) throw new AppError('request/not-found')
    if (set.latestVersion !== request.basedOn) {
      throw new AppError('object/version-conflict', {
        detail: `Version ${set.latestVersion} is the latest; yours was edited from version ${request.basedOn}.`,
        issues: [{ path: ['basedOn'], message: `expected ${set.latestVersion}; found ${request.basedOn}` }],
      })
    }
    const version = set.latestVersion + 1
    await saveVersion(tx, groupId, { setId, version, userId, ...request })
    await updateSet(tx, groupId, setId, { latestVersion: version })
    return getSetDetail(tx, groupId, setId)
  })

export const listParameterSetVersions = (groupId: string, setId: string) =>
  withGroup(groupId, async (tx) => {
    if (!(await findSet(tx, groupId, setId))) throw new AppError('request/not-found')
    return listVersions(tx, groupId, setId)
  })

export const getParameterSetVersion = (groupId: string, setId: string, version: number) =>
  withGroup(groupId, async (tx) => {
    const set = await findSet(tx, groupId, setId)
    const found = set && (await findVersion(tx, groupId, setId, version))
    if (!found) throw new AppError('request/not-found')
    return { set, version: found }
  })

export const renameParameterSet = (groupId: string, setId: string, { name }: SetRename) =>
  withUniqueName(
    name,
    withGroup(groupId, async (tx) => {
      if (!(await updateSet(tx, groupId, setId, { name }))) throw new AppError('request/not-found')
      return getSetDetail(tx, groupId, setId)
    }),
  )

export const removeParameterSet = async (groupId: string, setId: string): Promise<void> => {
  try {
    const removed = await withGroup(groupId, (tx) => removeSet(tx, groupId, setId))
    if (!removed) throw new AppError('request/not-found')
  } catch (error) {
    if (!isReferenceViolation(error)) throw error
    throw new AppError('object/in-use', { detail: 'Runs rest on versions of this parameter set, so it stays.' })
  }
}
