/** Answers of the server about files and measurements. Dates are ISO texts. */
import type { TableProposal, TableReading } from '#shared/schemas/measurement'
import type { Person } from '~/types/api'

export interface FileRef {
  id: string
  name: string
  byteLength: number
  sha256: string
}

export type UploadedFile = FileRef & { proposal: TableProposal }

export interface MeasurementItem {
  id: string
  name: string
  kind: 'absorption' | 'emission'
  sampleName: string
  temperatureK: number | null
  isInvented: boolean
  note: string
  pointCount: number
  hasUncertainties: boolean
  range: { energyMinMeV: number; energyMaxMeV: number }
  reading: TableReading
  file: FileRef
  createdAt: string
  createdBy: Person
}

export interface Measurement extends MeasurementItem {
  energiesMeV: number[]
  values: number[]
  uncertainties: number[] | null
}
