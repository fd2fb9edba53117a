import type { MeasurementItem } from '~/types/measurement'
import type { TableReading } from '#shared/schemas/measurement'

/** Words for the choices of a reading. */
export const readingChoices = {
  axisUnit: [
    { value: 'meV', label: 'meV' },
    { value: 'eV', label: 'eV' },
    { value: 'cm^-1', label: 'cm⁻¹' },
    { value: 'nm', label: 'nm' },
  ],
  wavelengthMedium: [
    { value: 'vacuum', label: 'vacuum' },
    { value: 'air', label: 'air' },
  ],
  jacobian: [
    { value: 'density', label: 'a density per nm: × λ²/(hc)' },
    { value: 'plain', label: 'left as they are' },
  ],
  delimiter: [
    { value: 'comma', label: 'comma' },
    { value: 'semicolon', label: 'semicolon' },
    { value: 'tab', label: 'tab' },
    { value: 'blanks', label: 'blanks' },
  ],
  decimalMark: [
    { value: 'point', label: 'point: 1.5' },
    { value: 'comma', label: 'comma: 1,5' },
  ],
  groupMark: [
    { value: 'none', label: 'none' },
    { value: 'comma', label: 'comma: 1,850' },
    { value: 'point', label: 'point: 1.850' },
    { value: 'blank', label: 'blank: 1 850' },
    { value: 'apostrophe', label: 'apostrophe: 1’850' },
  ],
  encoding: [
    { value: 'utf-8', label: 'UTF-8' },
    { value: 'utf-16le', label: 'UTF-16, little-endian' },
    { value: 'utf-16be', label: 'UTF-16, big-endian' },
    { value: 'windows-1252', label: 'Windows-1252' },
  ],
} as const

const columnText = (index: number): string => `column ${index + 1}`

/** A reading as rows of a table: what stands where in the file, and what was done to it. */
export const readingRows = (reading: TableReading): { name: string; text: string }[] => {
  const word = (choices: readonly { value: string; label: string }[], value: string) =>
    choices.find((choice) => choice.value === value)?.label ?? value
  const isWavelength = reading.axisUnit === 'nm'
  return [
    {
      name: 'axis',
      text: `${columnText(reading.axisColumn)}, ${word(readingChoices.axisUnit, reading.axisUnit)}${isWavelength ? ` in ${reading.wavelengthMedium}` : ''}`,
    },
    {
      name: 'values',
      text: `${columnText(reading.valueColumn)}${isWavelength ? (reading.applyJacobian ? ', multiplied by λ²/(hc)' : ', left as they are') : ''}`,
    },
    {
      name: 'uncertainty',
      text: reading.uncertaintyColumn === null ? 'none' : columnText(reading.uncertaintyColumn),
    },
    {
      name: 'text',
      text: `separated by ${word(readingChoices.delimiter, reading.delimiter)}, decimal ${reading.decimalMark}, ${word(readingChoices.encoding, reading.encoding)}`,
    },
    {
      name: 'left out',
      text:
        [
          reading.headerLines > 0 && `${reading.headerLines} lines of header`,
          reading.footerLines > 0 && `${reading.footerLines} lines at the end`,
          reading.skipIncomplete && 'incomplete rows',
        ]
          .filter(Boolean)
          .join(', ') || 'nothing',
    },
  ]
}

/** Title of a measurement's value axis. Values per meV where a wavelength density was converted. */
export const valueLabelOf = (measurement: Pick<MeasurementItem, 'kind' | 'reading'>): string =>
  `${measurement.kind} (${measurement.reading.applyJacobian ? 'arb. u./meV' : 'arb. u.'})`
