import { and, desc, eq, sql } from 'drizzle-orm'
import type { TableReading } from '../../../shared/schemas/measurement'
import { files, measurements, users } from '../schema'
import type { GroupTx } from '../with-group'

/** First and last energy without reading the whole array: eight bytes each. */
const firstEnergy = sql<Buffer>`substring(${measurements.energiesMeV} from 1 for 8)`
const lastEnergy = sql<Buffer>`substring(${measurements.energiesMeV} from octet_length(${measurements.energiesMeV}) - 7)`

const itemColumns = {
  id: measurements.id,
  name: measurements.name,
  kind: measurements.kind,
  sampleName: measurements.sampleName,
  temperatureK: measurements.temperatureK,
  isInvented: measurements.isInvented,
  note: measurements.note,
  reading: measurements.reading,
  pointCount: measurements.pointCount,
  hasUncertainties: sql<boolean>`${measurements.uncertainties} is not null`,
  firstEnergy,
  lastEnergy,
  createdAt: measurements.createdAt,
  file: { id: files.id, name: files.name, byteLength: files.byteLength, sha256: files.sha256 },
  createdBy: { id: users.id, name: users.name },
}

const arrayColumns = {
  energiesMeV: measurements.energiesMeV,
  values: measurements.values,
  uncertainties: measurements.uncertainties,
}

const ofMeasurement = (groupId: string, measurementId: string) =>
  and(eq(measurements.groupId, groupId), eq(measurements.id, measurementId))

export interface NewMeasurement {
  fileId: string
  name: string
  kind: 'absorption' | 'emission'
  sampleName: string
  temperatureK: number | null
  isInvented: boolean
  note: string
  reading: TableReading
  pointCount: number
  energiesMeV: Buffer
  values: Buffer
  uncertainties: Buffer | null
  createdBy: string
}

export const createMeasurement = async (tx: GroupTx, groupId: string, values: NewMeasurement): Promise<string> => {
  const [row] = await tx
    .insert(measurements)
    .values({ ...values, groupId })
    .returning({ id: measurements.id })
  if (!row) throw new Error('expected the new measurement; the insert returned none')
  return row.id
}

export const countMeasurements = (tx: GroupTx, groupId: string): Promise<number> =>
  tx.$count(measurements, eq(measurements.groupId, groupId))

export const listMeasurements = (tx: GroupTx, groupId: string) =>
  tx
    .select(itemColumns)
    .from(measurements)
    .innerJoin(files, eq(files.id, measurements.fileId))
    .innerJoin(users, eq(users.id, measurements.createdBy))
    .where(and(eq(measurements.groupId, groupId), eq(files.groupId, groupId)))
    .orderBy(desc(measurements.createdAt), desc(measurements.id))

export const findMeasurement = async (tx: GroupTx, groupId: string, measurementId: string) => {
  const [row] = await tx
    .select({ ...itemColumns, ...arrayColumns })
    .from(measurements)
    .innerJoin(files, eq(files.id, measurements.fileId))
    .innerJoin(users, eq(users.id, measurements.createdBy))
    .where(and(ofMeasurement(groupId, measurementId), eq(files.groupId, groupId)))
  return row ?? null
}

/** Removes the measurement and returns the id of its file; null when there was none. */
export const removeMeasurement = async (
  tx: GroupTx,
  groupId: string,
  measurementId: string,
): Promise<string | null> => {
  const [row] = await tx
    .delete(measurements)
    .where(ofMeasurement(groupId, measurementId))
    .returning({ fileId: measurements.fileId })
  return row?.fileId ?? null
}

export type MeasurementItemRow = Awaited<ReturnType<typeof listMeasurements>>[number]
export type MeasurementRow = NonNullable<Awaited<ReturnType<typeof findMeasurement>>>
