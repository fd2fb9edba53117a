import { z } from 'zod'
import { limits } from '../utils/limits'
import { quantities } from './quantities'
import { quantitySchema } from './quantity'

export const axisUnits = ['meV', 'eV', 'cm^-1', 'nm'] as const
export const measurementKinds = ['absorption', 'emission'] as const
export const delimiters = ['comma', 'semicolon', 'tab', 'blanks'] as const
export const decimalMarks = ['point', 'comma'] as const
export const encodings = ['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const

/** How a delimited text file is to be read. Proposed by the reader, corrected and confirmed by a person. */
export const TableReadingSchema = z.strictObject({
  encoding: z.enum(encodings),
  delimiter: z.enum(delimiters),
  decimalMark: z.enum(decimalMarks),
  /** Lines before the first row of numbers. */
  headerLines: z.int().min(0).max(10_000),
  axisColumn: z.int().min(0).max(999),
  valueColumn: z.int().min(0).max(999),
  uncertaintyColumn: z.int().min(0).max(999).nullable(),
  axisUnit: z.enum(axisUnits),
  /**
   * Whether values per nm become values per meV (multiply by lambda^2/(hc)). Emission is a density and needs it,
   * absorbance does not.
   */
  applyJacobian: z.boolean(),
})
export type TableReading = z.infer<typeof TableReadingSchema>

/** Body that turns an uploaded file into a stored measurement. */
export const MeasurementRequestSchema = z.strictObject({
  fileId: z.uuid(),
  name: z.string().trim().min(1, { error: 'expected a name; found an empty text' }).max(limits.nameLength),
  kind: z.enum(measurementKinds),
  sampleName: z.string().trim().max(limits.nameLength).default(''),
  temperatureK: quantitySchema(quantities.temperatureK).nullable().default(null),
  note: z.string().max(limits.noteLength).default(''),
  reading: TableReadingSchema,
})
export type MeasurementRequest = z.infer<typeof MeasurementRequestSchema>
