import type { TableProposal } from '../../shared/schemas/measurement'
import type { FileRow } from '../database/repositories/files.repository'
import type { MeasurementItemRow, MeasurementRow } from '../database/repositories/measurements.repository'
import { toPerson } from './account-answer'
import { fromBytes } from './spectrum-bytes'

const toFileRef = (file: Pick<FileRow, 'id' | 'name' | 'byteLength' | 'sha256'>) => ({
  id: file.id,
  name: file.name,
  byteLength: file.byteLength,
  sha256: file.sha256,
})

export const toFileWithProposal = ({ file, proposal }: { file: FileRow; proposal: TableProposal }) => ({
  ...toFileRef(file),
  proposal,
})

export const toMeasurementItem = (row: MeasurementItemRow) => ({
  id: row.id,
  name: row.name,
  kind: row.kind,
  sampleName: row.sampleName,
  temperatureK: row.temperatureK,
  isInvented: row.isInvented,
  note: row.note,
  pointCount: row.pointCount,
  hasUncertainties: row.hasUncertainties,
  range: { energyMinMeV: row.firstEnergy.readDoubleLE(0), energyMaxMeV: row.lastEnergy.readDoubleLE(0) },
  reading: row.reading,
  file: toFileRef(row.file),
  createdAt: row.createdAt.toISOString(),
  createdBy: toPerson(row.createdBy),
})

export const toMeasurement = (row: MeasurementRow) => ({
  ...toMeasurementItem(row),
  energiesMeV: fromBytes(row.energiesMeV),
  values: fromBytes(row.values),
  uncertainties: row.uncertainties === null ? null : fromBytes(row.uncertainties),
})

export type MeasurementItemAnswer = ReturnType<typeof toMeasurementItem>
export type MeasurementAnswer = ReturnType<typeof toMeasurement>
