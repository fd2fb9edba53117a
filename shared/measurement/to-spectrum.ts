import type { TableReading } from '../schemas/measurement'
import type { Points } from './read-points'
import { toEnergyMeV, wavelengthJacobian } from './units'
import { unreadable } from './unreadable'

/** A measured spectrum as it is stored: ascending energy in meV, no energy twice. */
export interface Spectrum {
  energiesMeV: Float64Array
  values: Float64Array
  /** Standard uncertainty of each value; null where the file had none. */
  uncertainties: Float64Array | null
  /** How many points of the file shared an energy with another and were averaged. */
  merged: number
}

/** Fewer points are no spectrum: a line, an offset and a scale need three. */
const minPoints = 3
/** Largest energy that still is one of light, 10 keV; excludes a wrong column or unit. */
const maxEnergyMeV = 1e7
/** Ciddor's formula for air has a pole below; its stated range begins at 230 nm. */
const minAirNm = 200

const energyOf = (position: number, line: number, reading: TableReading): number => {
  const place = { line, column: reading.axisColumn + 1 }
  if (reading.axisUnit === 'nm') {
    if (!(position > 0)) throw unreadable(place, `a wavelength of ${position} nm`, 'a wavelength above 0')
    if (reading.wavelengthMedium === 'air' && position < minAirNm)
      throw unreadable(place, `a wavelength of ${position} nm in air`, `at least ${minAirNm} nm in air, or vacuum`)
  }
  const energy = toEnergyMeV(position, reading.axisUnit, reading.wavelengthMedium)
  if (!(Math.abs(energy) <= maxEnergyMeV))
    throw unreadable(
      place,
      `an energy of ${energy} meV`,
      `at most ${maxEnergyMeV} meV; is ${reading.axisUnit} the unit?`,
    )
  return energy
}

/** Converts the rows of a table to a spectrum over energy. */
export const toSpectrum = (points: Points, reading: TableReading): Spectrum => {
  const count = points.axis.length
  if (count < minPoints) throw unreadable({}, `${count} rows of numbers`, `at least ${minPoints}`)
  const lineOf = (index: number) => points.lines[index] ?? 0
  const energies = points.axis.map((position, index) => energyOf(position, lineOf(index), reading))
  const factor = (index: number) => (reading.applyJacobian ? wavelengthJacobian(energies[index] ?? NaN) : 1)
  const order = Uint32Array.from(energies, (_, index) => index).sort(
    (a, b) => (energies[a] ?? 0) - (energies[b] ?? 0) || a - b,
  )

  const kept = { energies: [] as number[], values: [] as number[], uncertainties: [] as number[] }
  let merged = 0
  for (let start = 0; start < count;) {
    const energy = energies[order[start] ?? 0] ?? 0
    let end = start
    let sum = 0
    let variance = 0
    for (; end < count && energies[order[end] ?? 0] === energy; end += 1) {
      const index = order[end] ?? 0
      const uncertainty = points.uncertainties?.[index] ?? 0
      if (uncertainty < 0)
        throw unreadable(
          { line: lineOf(index), column: (reading.uncertaintyColumn ?? 0) + 1 },
          `an uncertainty of ${uncertainty}`,
          'an uncertainty of 0 or more',
        )
      sum += (points.values[index] ?? 0) * factor(index)
      variance += (uncertainty * factor(index)) ** 2
    }
    const size = end - start
    const value = sum / size
    const uncertainty = Math.sqrt(variance) / size
    if (!Number.isFinite(value) || !Number.isFinite(uncertainty))
      throw unreadable(
        { line: lineOf(order[start] ?? 0), column: reading.valueColumn + 1 },
        'a value too large to be converted',
        'a value below 1e300',
      )
    if (size > 1) merged += size
    kept.energies.push(energy)
    kept.values.push(value)
    kept.uncertainties.push(uncertainty)
    start = end
  }
  if (kept.energies.length < minPoints)
    throw unreadable(
      { column: reading.axisColumn + 1 },
      `${kept.energies.length} different positions on the axis in ${count} rows`,
      `at least ${minPoints}; is this the axis?`,
    )
  return {
    energiesMeV: Float64Array.from(kept.energies),
    values: Float64Array.from(kept.values),
    uncertainties: points.uncertainties === null ? null : Float64Array.from(kept.uncertainties),
    merged,
  }
}
