import { HC_MEV_NM } from '../engine/constants'
import type { TableReading } from '../schemas/measurement'

export type AxisUnit = TableReading['axisUnit']

/** Units of an energy axis, how the trade and its instruments spell them. Case tells milli from mega. */
const spellings: readonly { unit: AxisUnit | 'unknown'; name?: string; pattern: RegExp }[] = [
  { unit: 'unknown', name: 'MeV', pattern: /(?<![A-Za-z])M[eE]V(?![A-Za-z])/ },
  { unit: 'unknown', name: 'keV', pattern: /(?<![A-Za-z])[kK]eV(?![A-Za-z])/ },
  { unit: 'unknown', name: 'µeV', pattern: /(?<![A-Za-z])[µμu]eV(?![A-Za-z])/ },
  { unit: 'unknown', name: 'µm', pattern: /(?<![A-Za-z])(?:[µμu]m|microns?|micromet(?:er|re)s?)(?![A-Za-z])/i },
  { unit: 'unknown', name: 'Å', pattern: /Å|Å|(?<![A-Za-z])(?:angstr[oö]ms?)(?![A-Za-z])/i },
  { unit: 'unknown', name: 'frequency', pattern: /(?<![A-Za-z])(?:[TGMk]?Hz|rad\/[fp]s)(?![A-Za-z])/ },
  { unit: 'unknown', name: 'pixel', pattern: /(?<![A-Za-z])(?:pixels?|px|channels?)(?![A-Za-z])/i },
  { unit: 'meV', pattern: /(?<![A-Za-z])(?:meV|mev|milli-?\s?electron-?\s?volts?)(?![A-Za-z])/ },
  { unit: 'eV', pattern: /(?<![A-Za-z])(?:eV|ev|EV|[Ee]lectron-?\s?[Vv]olts?)(?![A-Za-z])/ },
  {
    unit: 'cm^-1',
    pattern:
      /(?<![A-Za-z])(?:cm\s?(?:\^|\*\*)?\s?[{(]?\s?[-\u2212\u2013\u207b]\s?[1\u00b9]|1\s?\/\s?cm(?![A-Za-z])|cm\u207b\u00b9|per cm(?![A-Za-z])|[Kk]aysers?|[Ii]nverse centimet(?:er|re)s?|[Rr]eciprocal centimet(?:er|re)s?)/,
  },
  { unit: 'nm', pattern: /(?<![A-Za-z])(?:nm|NM|[Nn]anomet(?:er|re)s?|NANOMET(?:ER|RE)S?)(?![A-Za-z])/ },
]

export interface UnitMention {
  unit: AxisUnit | 'unknown'
  /** As written. */
  text: string
  index: number
}

/** Every unit of an axis that a text names, in order; a unit behind a number ("532 nm") or a slash ("counts/nm") is none. */
export const unitsIn = (text: string): UnitMention[] => {
  const mentions: UnitMention[] = []
  for (const { unit, name, pattern } of spellings) {
    const match = pattern.exec(text)
    if (match === null) continue
    const before = text.slice(0, match.index)
    if (/[0-9]\s*$/.test(before)) continue
    if (/(?:counts|cts|arb|a\.?u\.?|intensity|photons|s|W|absorbance)\s*(?:\/|per)\s*$/i.test(before)) continue
    mentions.push({ unit, text: name ?? match[0], index: match.index })
  }
  return mentions.sort((a, b) => a.index - b.index)
}

/** Whether a label says that values are per wavelength interval, as in "counts/nm" or "W nm^-1". */
export const isPerWavelength = (label: string): boolean =>
  /(?:\/|per)\s*nm(?![A-Za-z])|(?<![A-Za-z])nm\s?(?:\^|\*\*)?\s?\{?[-\u2212\u207b]\s?[1\u00b9]/.test(label)

/** Whether a label says that values are already per energy interval. */
export const isPerEnergy = (label: string): boolean => /(?:\/|per)\s*m?eV(?![A-Za-z])/.test(label)

const MEV_PER_WAVENUMBER = HC_MEV_NM * 1e-7

/**
 * Refractive index of standard dry air (15 C, 101325 Pa, 450 ppm CO2) minus 1, at a vacuum wavelength in nm.
 * Source: P. E. Ciddor, Appl. Opt. 35, 1566 (1996), equation 1. Valid 230 to 1690 nm.
 */
export const airRefractivity = (vacuumNm: number): number => {
  const s2 = (1000 / vacuumNm) ** 2
  return (5792105 / (238.0185 - s2) + 167917 / (57.362 - s2)) * 1e-8
}

/** Vacuum wavelength of an air wavelength, nm; two rounds of the fixed point leave less than 1e-12 relative. */
export const toVacuumNm = (airNm: number): number => {
  let vacuumNm = airNm
  for (let round = 0; round < 4; round += 1) vacuumNm = airNm * (1 + airRefractivity(vacuumNm))
  return vacuumNm
}

/** Energy in meV of a position on the axis. Wavelengths must be above 0. */
export const toEnergyMeV = (position: number, unit: AxisUnit, medium: TableReading['wavelengthMedium']): number => {
  switch (unit) {
    case 'meV':
      return position
    case 'eV':
      return position * 1000
    case 'cm^-1':
      return position * MEV_PER_WAVENUMBER
    case 'nm':
      return HC_MEV_NM / (medium === 'air' ? toVacuumNm(position) : position)
  }
}

/** |d lambda / dE| = lambda^2 / (hc) = hc / E^2 in nm/meV: turns a density per nm into one per meV. */
export const wavelengthJacobian = (energyMeV: number): number => HC_MEV_NM / energyMeV ** 2
