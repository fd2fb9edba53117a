import type { ReadingQuestion, ReadingWarning, TableReading } from '../schemas/measurement'
import { axisUnits } from '../schemas/measurement'
import { isBlank, withoutCommentMark } from './fields'
import type { Labels } from './columns'
import type { Line } from './text-lines'
import { isPerEnergy, isPerWavelength, toEnergyMeV, unitsIn, type AxisUnit } from './units'
import { quote } from './unreadable'

/** What was found out about one field: its value, and what a person must be told or asked. */
export interface Finding<Value> {
  value: Value
  question?: ReadingQuestion
  warning?: ReadingWarning
}

export interface Extent {
  min: number
  max: number
}

/** Light of measured spectra, meV: far infrared to soft x-ray. Outside, a stated unit is doubted. */
const plausible = { min: 20, max: 20_000 }
/** Where most spectra of excitons lie; orders the choices when the file is silent. */
const usual = { min: 300, max: 7000 }

const energiesOf = (extent: Extent, unit: AxisUnit): Extent | undefined => {
  if (unit === 'nm' && !(extent.min > 0)) return undefined
  const ends = [toEnergyMeV(extent.min, unit, 'vacuum'), toEnergyMeV(extent.max, unit, 'vacuum')]
  return { min: Math.min(...ends), max: Math.max(...ends) }
}

const within = (extent: Extent | undefined, range: Extent): boolean =>
  extent !== undefined && extent.min >= range.min && extent.max <= range.max

const short = (value: number): string => String(Number(value.toPrecision(5)))

const unitChoices = (extent: Extent): ReadingQuestion['choices'] =>
  axisUnits
    .filter((unit) => energiesOf(extent, unit) !== undefined)
    .map((unit) => {
      const energies = energiesOf(extent, unit) ?? extent
      const asEnergy = unit === 'meV' ? '' : `, that is ${short(energies.min)} to ${short(energies.max)} meV`
      const noFactor = unit === 'nm' ? {} : { applyJacobian: false }
      return {
        label: `${unit}: ${short(extent.min)} to ${short(extent.max)} ${unit}${asEnergy}`,
        change: { axisUnit: unit, ...noFactor },
      }
    })

const bestUnit = (extent: Extent): AxisUnit => {
  const order: AxisUnit[] = extent.min >= 190 && extent.max <= 1300 ? ['nm', 'meV'] : ['eV', 'meV', 'cm^-1', 'nm']
  return (
    order.find((unit) => within(energiesOf(extent, unit), usual)) ??
    order.find((unit) => within(energiesOf(extent, unit), plausible)) ??
    'meV'
  )
}

const aboutTheAxis = /energ|wave\s?length|wave\s?number|axis|unit|abscissa|photon|(?<![a-z])x(?![a-z])/i
const aboutSomethingElse = /laser|excit|pump|slit|resolution|step|bandwidth|filter|offset|fwhm|shift/i

/** Unit of the axis: its label, else a header line about the axis, else a question. Always checked against the numbers. */
export const findAxisUnit = (
  labels: Labels,
  header: readonly Line[],
  column: number,
  extent: Extent,
): Finding<AxisUnit> => {
  const label = `${labels.names[column] ?? ''} ${labels.units[column] ?? ''}`.trim()
  const ask = (message: string, value = bestUnit(extent)): Finding<AxisUnit> => ({
    value,
    question: { field: 'axisUnit', message, choices: unitChoices(extent) },
  })
  const inLabel = unitsIn(label)
  const foreign = inLabel.find((mention) => mention.unit === 'unknown')
  if (foreign !== undefined)
    return ask(
      `The axis is labelled ${quote(label)}, and ${foreign.text} is none of meV, eV, cm^-1 and nm. Which of these are the numbers in? If none, convert the file first.`,
    )
  let stated = [...new Set(inLabel.map((mention) => mention.unit as AxisUnit))]
  let source: Line | undefined
  if (stated.length === 0) {
    const lines = header.filter(
      (line) => !isBlank(line.text) && aboutTheAxis.test(line.text) && !aboutSomethingElse.test(line.text),
    )
    const mentions = lines.flatMap((line) =>
      unitsIn(withoutCommentMark(line.text).slice(0, 1000)).map((mention) => ({ ...mention, line })),
    )
    stated = [...new Set(mentions.map((mention) => mention.unit))].filter((unit) => unit !== 'unknown')
    source = mentions[0]?.line
    if (mentions.some((mention) => mention.unit === 'unknown')) stated = []
  }
  const [unit] = stated
  if (unit === undefined) return ask('The file does not say in which unit its axis is.')
  if (stated.length > 1) return ask(`The file names several units of the axis: ${stated.join(', ')}.`, unit)
  // A wavelength of 0 or below is no doubt about the unit but a fault of the file, which the conversion names.
  if (unit === 'nm' && !(extent.min > 0)) return { value: unit }
  const energies = energiesOf(extent, unit)
  const isRelative = unit !== 'nm' && extent.min <= 0
  if (!isRelative && !within(energies, plausible))
    return ask(
      `The file says ${unit}, but ${short(extent.min)} to ${short(extent.max)} ${unit} is no usual range of a spectrum.`,
      bestUnit(extent),
    )
  const finding: Finding<AxisUnit> = { value: unit }
  if (source !== undefined)
    finding.warning = {
      code: 'unit-from-text',
      message: `The unit ${unit} is taken from line ${source.number}, ${quote(source.text.trim())}.`,
    }
  return finding
}

const absorptionWords = /absor|extinct|optical density|(?<![a-z])od(?![a-z])|transm|reflect/i
const emissionWords = /emission|(?<![a-z])pl(?![a-z])|luminesc|fluoresc|counts|(?<![a-z])cts(?![a-z])|intens/i

/** Whether values over wavelength are densities per nm, so that they change with the step from nm to meV. */
export const findJacobian = (
  unit: AxisUnit,
  valueLabel: string,
  header: readonly Line[],
): Finding<TableReading['applyJacobian']> => {
  if (unit !== 'nm') return { value: false }
  const applied = { value: true }
  if (isPerWavelength(valueLabel)) return applied
  if (isPerEnergy(valueLabel)) return { value: false }
  const text = [valueLabel, ...header.map((line) => line.text.slice(0, 500))].join('\n')
  const isAbsorption = absorptionWords.test(text)
  const isEmission = emissionWords.test(text)
  if (isAbsorption && !isEmission) return { value: false }
  if (isEmission && !isAbsorption) return applied
  return {
    value: false,
    question: {
      field: 'applyJacobian',
      message:
        'Are the values a density per nm, as an emission spectrum is, or do they belong to each wavelength alone, as absorbance does?',
      choices: [
        { label: 'Density per nm: multiply by lambda^2/(hc)', change: { applyJacobian: true } },
        { label: 'Absorbance and the like: leave the values', change: { applyJacobian: false } },
      ],
    },
  }
}

/** Whether wavelengths are those in air; spectrometers often show these, and the file seldom says. */
export const findMedium = (
  unit: AxisUnit,
  label: string,
  header: readonly Line[],
): TableReading['wavelengthMedium'] => {
  const text = [label, ...header.map((line) => line.text.slice(0, 500))].join('\n')
  return unit === 'nm' && /(?<![a-z])(?:in air|air wavelengths?)(?![a-z])/i.test(text) ? 'air' : 'vacuum'
}
