import { AppError } from '../../shared/errors/app-error'
import type { MeasurementRequest } from '../../shared/schemas/measurement'
import { isReferenceViolation, isUniqueViolation } from '../database/postgres-errors'
import { findFile, removeFileIfUnused } from '../database/repositories/files.repository'
import {
  countMeasurements,
  createMeasurement,
  findMeasurement,
  listMeasurements,
  removeMeasurement,
} from '../database/repositories/measurements.repository'
import { withGroup } from '../database/with-group'
import { getFileStore } from '../storage/current'
import { toBytes } from './spectrum-bytes'
import { readSpectrum } from './table-reader.service'

const measurementsPerGroup = 10_000

const nameTaken = (name: string) =>
  new AppError('object/name-taken', {
    detail: `The group already has a measurement named "${name}".`,
    issues: [{ path: ['name'], message: 'expected a name that no other measurement of the group has' }],
  })

const noSuchFile = () =>
  new AppError('request/not-found', {
    detail: 'The group has no such file.',
    issues: [{ path: ['fileId'], message: 'expected the id of a file of this group; found an unknown one' }],
  })

export const listGroupMeasurements = (groupId: string) => withGroup(groupId, (tx) => listMeasurements(tx, groupId))

export const getMeasurement = async (groupId: string, measurementId: string) => {
  const found = await withGroup(groupId, (tx) => findMeasurement(tx, groupId, measurementId))
  if (!found) throw new AppError('request/not-found')
  return found
}

/** Reads the file as confirmed and stores its numbers. `isInvented` marks data that no instrument has measured. */
export const addMeasurement = async (
  groupId: string,
  userId: string,
  request: MeasurementRequest,
  { isInvented = false } = {},
) => {
  const file = await withGroup(groupId, (tx) => findFile(tx, groupId, request.fileId))
  if (!file) throw noSuchFile()
  const spectrum = await readSpectrum(file, request.reading)
  try {
    const id = await withGroup(groupId, async (tx) => {
      if ((await countMeasurements(tx, groupId)) >= measurementsPerGroup)
        throw new AppError('quota/exceeded', {
          detail: `A group may hold at most ${measurementsPerGroup} measurements.`,
        })
      if (!(await findFile(tx, groupId, file.id))) throw noSuchFile()
      return createMeasurement(tx, groupId, {
        ...request,
        fileId: file.id,
        isInvented,
        pointCount: spectrum.energiesMeV.length,
        energiesMeV: toBytes(spectrum.energiesMeV),
        values: toBytes(spectrum.values),
        uncertainties: spectrum.uncertainties === null ? null : toBytes(spectrum.uncertainties),
        createdBy: userId,
      })
    })
    return await getMeasurement(groupId, id)
  } catch (error) {
    if (isUniqueViolation(error)) throw nameTaken(request.name)
    if (isReferenceViolation(error)) throw noSuchFile()
    throw error
  }
}

/** Removes a measurement, and its file when no other measurement was read from it. */
export const removeGroupMeasurement = async (groupId: string, measurementId: string): Promise<void> => {
  const storageKey = await withGroup(groupId, async (tx) => {
    const fileId = await removeMeasurement(tx, groupId, measurementId)
    if (fileId === null) throw new AppError('request/not-found')
    return removeFileIfUnused(tx, groupId, fileId)
  })
  if (storageKey !== null) await getFileStore().remove(storageKey)
}
