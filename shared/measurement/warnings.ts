import type { ReadingWarning, TableReading } from '../schemas/measurement'
import type { Points } from './read-points'
import type { Spectrum } from './to-spectrum'

const count = (number: number, singular: string, plural: string) => `${number} ${number === 1 ? singular : plural}`

/** Relative deviation of a step from the mean step that is worth a word. */
const evenness = 0.01

const stepsOf = (axis: Float64Array) => {
  let rises = 0
  let falls = 0
  for (let index = 1; index < axis.length; index += 1) {
    const step = (axis[index] ?? 0) - (axis[index - 1] ?? 0)
    if (step > 0) rises += 1
    if (step < 0) falls += 1
  }
  return { rises, falls }
}

const isUneven = (axis: Float64Array): boolean => {
  const sorted = Float64Array.from(axis).sort()
  const mean = ((sorted.at(-1) ?? 0) - (sorted[0] ?? 0)) / (sorted.length - 1)
  return sorted.some(
    (position, index) => index > 0 && Math.abs(position - (sorted[index - 1] ?? 0) - mean) > evenness * mean,
  )
}

/** What a person should know about the numbers of a spectrum before it is stored. */
export const warningsOf = (points: Points, spectrum: Spectrum, reading: TableReading): ReadingWarning[] => {
  const warnings: ReadingWarning[] = []
  const warn = (code: ReadingWarning['code'], message: string) => warnings.push({ code, message })
  if (reading.applyJacobian)
    warn(
      'jacobian-applied',
      'Values are taken per nm and multiplied by lambda^2/(hc), which makes them values per meV.',
    )
  if (reading.axisUnit === 'nm' && reading.wavelengthMedium === 'air')
    warn('wavelength-air', 'Wavelengths in air are turned into vacuum ones before the conversion.')
  if (reading.axisUnit === 'nm' && reading.wavelengthMedium === 'vacuum')
    warn(
      'wavelength-vacuum',
      'Wavelengths are taken as vacuum values; if they are air values, energies come out about 0.03 % too high.',
    )
  const { rises, falls } = stepsOf(points.axis)
  if (falls > 0 && rises === 0)
    warn('axis-descending', 'The axis falls from row to row; the points are stored in ascending energy.')
  if (falls > 0 && rises > 0)
    warn(
      'axis-not-monotonic',
      `The axis rises ${count(rises, 'time', 'times')} and falls ${count(falls, 'time', 'times')}; the points are sorted by energy.`,
    )
  if (spectrum.merged > 0)
    warn(
      'points-duplicate',
      `${count(spectrum.merged, 'point shares its', 'points share their')} energy with another; points of equal energy are averaged.`,
    )
  if (isUneven(points.axis))
    warn('axis-uneven', 'The steps of the axis are not even; this is no fault, and nothing is interpolated.')
  if ((spectrum.energiesMeV[0] ?? 0) <= 0)
    warn('axis-relative', 'The axis reaches 0 or below, so its energies seem to be relative to some line.')
  const { missing } = points
  if (missing.count > 0) {
    const where = missing.first.map(({ line, column }) => `line ${line}, column ${column}`).join('; ')
    warn(
      'cells-missing',
      `${count(missing.count, 'row has', 'rows have')} a blank or undefined cell (${where}${missing.count > 3 ? '; …' : ''}) and ${missing.count === 1 ? 'is' : 'are'} left out.`,
    )
  }
  if (points.unusualSigns > 0)
    warn(
      'signs-unusual',
      `${count(points.unusualSigns, 'number has', 'numbers have')} a typographic minus sign, read as minus.`,
    )
  const negative = spectrum.values.filter((value) => value < 0).length
  if (negative > 0) warn('values-negative', `${count(negative, 'value is', 'values are')} below 0.`)
  if (spectrum.values.every((value) => value === spectrum.values[0]))
    warn('values-constant', `All values are ${spectrum.values[0]}; is this the column of the values?`)
  const zero = spectrum.uncertainties?.filter((value) => value === 0).length ?? 0
  if (zero > 0)
    warn('uncertainty-zero', `${count(zero, 'uncertainty is', 'uncertainties are')} 0; such points cannot be weighted.`)
  return warnings
}
