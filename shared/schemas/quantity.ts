import { z } from 'zod'

/** Units that a stored quantity may carry. Energies are always stored in meV, times in ps, temperatures in K. */
export type Unit = '1' | 'meV' | 'meV/K' | 'ps' | 'K' | 'eV' | 'nm' | 'm/s' | 'kg/m^3' | 'C/m^2'

/** Everything a form, a printed table and an error text need to know about one physical quantity. */
export interface Quantity {
  /** Plain name, as printed in the parameter table. */
  name: string
  /** Symbol in the house's light markup: `_` starts a subscript, `^` a superscript, braces group. */
  symbol: string
  unit: Unit
  min: number
  max: number
  /** True where `min` itself is not allowed (an exponent of 0, for instance). */
  exclusiveMin?: boolean
  /** True for the energy of a photon, which may also be typed as a vacuum wavelength. */
  photonEnergy?: boolean
  /** One line in place: what the number means. */
  meaning: string
}

/** Whether a wavelength may stand for this quantity. */
export const isPhotonEnergy = (quantity: Quantity): boolean => quantity.photonEnergy === true

const formatBound = (value: number): string =>
  Math.abs(value) >= 1e6 || (value !== 0 && Math.abs(value) < 1e-3) ? value.toExponential() : String(value)

/** Text of the allowed range with its unit, for instance `0 to 500 meV` or `above 0, up to 6`. */
export const formatRange = (quantity: Quantity): string => {
  const unit = quantity.unit === '1' ? '' : ` ${quantity.unit}`
  return quantity.exclusiveMin
    ? `above ${formatBound(quantity.min)}, up to ${formatBound(quantity.max)}${unit}`
    : `${formatBound(quantity.min)} to ${formatBound(quantity.max)}${unit}`
}

/** Short, safe text of what was found in place of a number. */
export const describeFound = (value: unknown): string => {
  if (value === undefined) return 'nothing'
  if (value === null) return 'null'
  if (typeof value === 'number') return String(value)
  if (typeof value === 'string') return value === '' ? 'an empty text' : `the text "${value.slice(0, 40)}"`
  if (Array.isArray(value)) return 'a list'
  return `a value of type ${typeof value}`
}

/** zod schema of one physical quantity: finite, inside its range, with a message that names what was found and expected. */
export const quantitySchema = (quantity: Quantity) => {
  const error = (issue: { input?: unknown }) =>
    `expected ${quantity.name} as a number, ${formatRange(quantity)}; found ${describeFound(issue.input)}`
  const number = z.number({ error })
  const bounded = quantity.exclusiveMin ? number.gt(quantity.min, { error }) : number.gte(quantity.min, { error })
  return bounded.lte(quantity.max, { error }).meta({ quantity })
}
