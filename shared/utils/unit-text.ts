import { create, createUnitDependencies, unitDependencies, type Unit as MathUnit } from 'mathjs'
import { SI } from '../engine/constants'

const math = create({ ...unitDependencies, ...createUnitDependencies })
// mathjs still holds the 2010 value of the electronvolt; the SI fixed it exactly in 2019.
math.createUnit('eV', { definition: `${SI.elementaryChargeC} J`, prefixes: 'short' }, { override: true })
math.createUnit('kcal', '4184 J', { override: true })

const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹'

/** `cm⁻¹`, `µeV / K`, `meV·K^-1` in the spelling that mathjs reads. */
const toPlainUnit = (text: string): string =>
  text
    .replace(/[⁰¹²³⁴⁵⁶⁷⁸⁹]/g, (digit) => String(superscripts.indexOf(digit)))
    .replace(/[⁻−]/g, '-')
    .replace(/[µμ]/g, 'u')
    .replace(/°\s*C/g, 'degC')
    .replace(/·/g, '*')
    .replace(/([A-Za-z])\s*(-?\d)/g, '$1^$2')
    .replace(/\s+/g, ' ')
    .trim()

// Letters with an optional whole power, joined by / or * or a blank; or 1/unit. No numbers of its own, no brackets:
// text that could be an expression never reaches the parser.
const plainUnit =
  /^(?:1 ?\/ ?)?[A-Za-z]{1,12}(?:\^-?\d)?(?: ?[/*] ?[A-Za-z]{1,12}(?:\^-?\d)?| [A-Za-z]{1,12}(?:\^-?\d)?){0,5}$/

/** A unit written by a person, or null when the text is not a unit. */
export const readUnit = (text: string): MathUnit | null => {
  const plain = toPlainUnit(text)
  if (!plainUnit.test(plain)) return null
  try {
    return plain.startsWith('1')
      ? math.unit(`1 ${plain.replace(/^1 ?\/ ?([A-Za-z]+)(?:\^(\d))?/, (_, name, power) => `${name}^-${power ?? 1}`)}`)
      : math.unit(`1 ${plain}`)
  } catch {
    return null
  }
}

/** Value in SI units of `amount` of a unit; with the offset that only degrees Celsius have. */
export const toSi = (amount: number, unit: MathUnit): number =>
  math.unit(amount, unit.formatUnits()).toSI().toNumeric() as number

/** True when both units measure the same kind of quantity. */
export const isSameKind = (one: MathUnit, other: MathUnit): boolean => one.equalBase(other)
