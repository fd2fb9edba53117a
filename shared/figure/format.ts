/** Text of numbers in figures: typographic minus, superscript powers, no host locale. */

const superscripts: Record<string, string> = {
  '-': '⁻',
  '0': '⁰',
  '1': '¹',
  '2': '²',
  '3': '³',
  '4': '⁴',
  '5': '⁵',
  '6': '⁶',
  '7': '⁷',
  '8': '⁸',
  '9': '⁹',
}

export const superscript = (exponent: number): string =>
  [...String(exponent)].map((character) => superscripts[character] ?? character).join('')

/** Typographic minus, so that signs stand as wide as digits. */
export const withMinus = (text: string): string => text.replace('-', '−')

export const powerOfTen = (exponent: number): string =>
  exponent === 0 ? '1' : exponent === 1 ? '10' : `10${superscript(exponent)}`

/** A number as short as it can be without loss beyond twelve digits: for true values such as 4 K or 0.25 ps. */
export const formatPlain = (value: number): string => {
  const short = Number(value.toPrecision(12))
  const size = Math.abs(short)
  if (short !== 0 && (size < 1e-4 || size >= 1e6)) {
    const [mantissa, exponent] = short.toExponential().split('e')
    const power = powerOfTen(Number(exponent))
    return mantissa === '1' ? power : `${withMinus(mantissa ?? '')} × ${power}`
  }
  return withMinus(String(short))
}

/** A number rounded to so many significant digits, then as short as it can be. */
export const formatDigits = (value: number, digits = 4): string =>
  Number.isFinite(value) ? formatPlain(Number(value.toPrecision(digits))) : '–'

/** The text in the last parentheses of an axis title: its unit, or an empty text. */
export const unitOf = (label: string): string => /\(([^()]*)\)\s*$/.exec(label)?.[1] ?? ''

/** An axis title without its unit. */
export const quantityOf = (label: string): string => label.replace(/\s*\([^()]*\)\s*$/, '')
