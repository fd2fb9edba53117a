import { z } from 'zod'
import { limits } from '../utils/limits'
import { quantities } from './quantities'
import { quantitySchema } from './quantity'

export const axisUnits = ['meV', 'eV', 'cm^-1', 'nm'] as const
export const measurementKinds = ['absorption', 'emission'] as const
export const delimiters = ['comma', 'semicolon', 'tab', 'blanks'] as const
export const decimalMarks = ['point', 'comma'] as const
export const groupMarks = ['none', 'comma', 'point', 'blank', 'apostrophe'] as const
export const encodings = ['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const
export const wavelengthMedia = ['vacuum', 'air'] as const

/** How a delimited text file is to be read. Proposed by the reader, corrected and confirmed by a person. */
export const TableReadingSchema = z
  .strictObject({
    encoding: z.enum(encodings),
    delimiter: z.enum(delimiters),
    decimalMark: z.enum(decimalMarks),
    /** Mark between groups of three digits, as in 1,850.5 or 1 850,5. */
    groupMark: z.enum(groupMarks).default('none'),
    /** Lines before the first row of numbers. */
    headerLines: z.int().min(0).max(10_000),
    /** Lines of text after the last row of numbers. */
    footerLines: z.int().min(0).max(10_000).default(0),
    axisColumn: z.int().min(0).max(999),
    valueColumn: z.int().min(0).max(999),
    uncertaintyColumn: z.int().min(0).max(999).nullable(),
    axisUnit: z.enum(axisUnits),
    /** Where the wavelengths of an nm axis were calibrated; air wavelengths are turned into vacuum ones first. */
    wavelengthMedium: z.enum(wavelengthMedia).default('vacuum'),
    /**
     * Whether values per nm become values per meV (multiply by lambda^2/(hc)). Emission is a density and needs it,
     * absorbance does not.
     */
    applyJacobian: z.boolean(),
    /** Leave out rows whose axis, value or uncertainty is blank or not a number; false refuses such a file. */
    skipIncomplete: z.boolean().default(false),
  })
  .superRefine((reading, context) => {
    const refuse = (path: string, message: string) =>
      context.addIssue({ code: 'custom', path: [path], message, input: reading })
    if (reading.groupMark === reading.decimalMark)
      refuse('groupMark', `expected another thousands mark than the decimal mark; found ${reading.groupMark} for both`)
    if (reading.valueColumn === reading.axisColumn)
      refuse('valueColumn', `expected another column than the axis; found column ${reading.axisColumn + 1} for both`)
    if (reading.uncertaintyColumn === reading.axisColumn || reading.uncertaintyColumn === reading.valueColumn)
      refuse('uncertaintyColumn', 'expected a column of its own for the uncertainty; found one that is already in use')
    if (reading.applyJacobian && reading.axisUnit !== 'nm')
      refuse('applyJacobian', `expected the wavelength factor with an axis in nm only; found ${reading.axisUnit}`)
  })
export type TableReading = z.infer<typeof TableReadingSchema>

export const readingFields = TableReadingSchema.keyof().options

/** What the reader cannot know and a person must decide: each choice is a change of the reading. */
export const ReadingQuestionSchema = z.strictObject({
  field: z.enum(readingFields),
  message: z.string(),
  choices: z.array(z.strictObject({ label: z.string(), change: z.record(z.string(), z.unknown()) })),
})
export interface ReadingQuestion {
  field: keyof TableReading
  message: string
  /** `change` is merged into the reading when the choice is taken. */
  choices: { label: string; change: Partial<TableReading> }[]
}

export const readingWarningCodes = [
  'axis-descending',
  'axis-not-monotonic',
  'axis-uneven',
  'axis-relative',
  'points-duplicate',
  'cells-missing',
  'numbers-grouped',
  'signs-unusual',
  'footer-left-out',
  'unit-from-text',
  'wavelength-vacuum',
  'wavelength-air',
  'jacobian-applied',
  'values-negative',
  'values-constant',
  'uncertainty-zero',
  'columns-ignored',
  'encoding-legacy',
] as const
export interface ReadingWarning {
  code: (typeof readingWarningCodes)[number]
  message: string
}

/** What the reader understood of an uploaded table, shown before anything is stored as a measurement. */
export interface TableProposal {
  reading: TableReading
  /** The first lines of the file as text, shortened. */
  head: string[]
  /** Every column of the rows of numbers; `name` and `unit` are empty where the header has none. */
  columns: { index: number; name: string; unit: string; sample: string[] }[]
  /** Rows of numbers that the reading takes. */
  rows: number
  /** The spectrum as it would be stored, thinned to at most 2000 points. */
  preview: { energiesMeV: number[]; values: number[] }
  /** Extent on the axis as written, and in energy. */
  range: { axisMin: number; axisMax: number; energyMinMeV: number; energyMaxMeV: number }
  warnings: ReadingWarning[]
  /** Empty when every field of the reading follows from the file. */
  needsAnswer: ReadingQuestion[]
}

/** Body of a corrected reading; `answered` names the questions that the person has decided. */
export const ReadingRequestSchema = z.strictObject({
  reading: TableReadingSchema,
  answered: z.array(z.enum(readingFields)).max(readingFields.length).default([]),
})
export type ReadingRequest = z.infer<typeof ReadingRequestSchema>

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
