import { HBAR_MEV_PS, HC_MEV_NM, PLANCK_MEV_PS, SI } from '../engine/constants'
import { isPhotonEnergy, type Quantity } from '../schemas/quantity'
import { isSameKind, readUnit, toSi } from './unit-text'

export type ParsedQuantity = { ok: true; value: number } | { ok: false; message: string }

const refuse = (message: string): ParsedQuantity => ({ ok: false, message })

const number = /^([+-]?)(\d*)(?:([.,])(\d*))?(?:e([+-]?\d{1,3}))?(?![\d.,])/i

/** `1.5 × 10^-3`, `1.5×10⁻³` and a typographic minus, as a keyboard would have them. */
const toPlainNumber = (text: string): string =>
  text
    .replace(/[\u00a0\u2009\u202f]/g, ' ')
    .trim()
    .replace(/^[−–]/, '-')
    .replace(/\s*[×·*]\s*10\^?([-−⁻+]?)([\d⁰¹²³⁴⁵⁶⁷⁸⁹]+)/, (_, sign: string, digits: string) => {
      const plain = digits.replace(/[⁰¹²³⁴⁵⁶⁷⁸⁹]/g, (digit) => String('⁰¹²³⁴⁵⁶⁷⁸⁹'.indexOf(digit)))
      return `e${sign.replace(/[−⁻]/, '-')}${plain}`
    })

/** Spectroscopists' energies: every kind of unit that stands for an energy, as meV per SI unit of it. */
const energyKinds = [
  { unit: 'meV', toMeV: (si: number) => (si / SI.elementaryChargeC) * 1e3 },
  { unit: 'cm^-1', toMeV: (si: number) => si * HC_MEV_NM * 1e-9 },
  { unit: 'rad/ps', toMeV: (si: number) => si * HBAR_MEV_PS * 1e-12 },
  { unit: 'THz', toMeV: (si: number) => si * PLANCK_MEV_PS * 1e-12 },
  { unit: 'kJ/mol', toMeV: (si: number) => (si / SI_AVOGADRO / SI.elementaryChargeC) * 1e3 },
] as const

/** Avogadro constant, exact since 2019, 1/mol. */
const SI_AVOGADRO = 6.02214076e23

const hints: Partial<Record<string, string>> = {
  meV: 'meV, eV, cm^-1, GHz, THz or rad/ps',
  'meV/K': 'meV/K, µeV/K, cm^-1/K or GHz/K',
  ps: 'ps, fs or ns',
  K: 'K, mK or °C',
}

const expectedUnits = (quantity: Quantity): string => {
  const units = hints[quantity.unit] ?? quantity.unit
  return isPhotonEnergy(quantity) ? `${units.replace(' or ', ', ')} or nm` : units
}

/** Removes the noise of a conversion: a value typed with a dozen digits comes back with those digits. */
const tidy = (value: number): number => Number(value.toPrecision(15))

const unknownKind = (quantity: Quantity, unitText: string): ParsedQuantity =>
  refuse(`expected ${quantity.name} in ${expectedUnits(quantity)}; found the unit "${unitText.slice(0, 20)}"`)

const convert = (amount: number, unitText: string, quantity: Quantity): ParsedQuantity => {
  if (quantity.unit === '1') return refuse(`expected ${quantity.name} without a unit; found "${unitText.slice(0, 20)}"`)
  const unit = readUnit(unitText)
  const stored = readUnit(quantity.unit)
  if (!unit || !stored) return unknownKind(quantity, unitText)
  const si = toSi(amount, unit)

  if (isSameKind(unit, stored)) return { ok: true, value: tidy(toStored(si, quantity.unit)) }
  if (quantity.unit !== 'meV' && quantity.unit !== 'meV/K') return unknownKind(quantity, unitText)

  const perKelvin = quantity.unit === 'meV/K' ? '/K' : ''
  const kind = energyKinds.find((each) => {
    const known = readUnit(each.unit + perKelvin)
    return known !== null && isSameKind(unit, known)
  })
  // 1/ps may mean cycles or radians, a factor 2 pi apart: only hertz and rad/ps say which.
  if (kind?.unit === 'THz' && !/Hz/.test(unitText)) {
    return refuse(`expected THz (cycles) or rad/ps (radians); "${unitText.slice(0, 20)}" does not say which`)
  }
  if (kind) return { ok: true, value: tidy(kind.toMeV(si)) }

  const metre = readUnit('m')
  if (perKelvin === '' && metre && isSameKind(unit, metre)) {
    if (!isPhotonEnergy(quantity)) {
      return refuse(`a wavelength gives a photon energy, not the ${quantity.name}; expected ${expectedUnits(quantity)}`)
    }
    if (!(si > 0)) return refuse(`expected a wavelength above 0 nm; found ${amount} ${unitText}`)
    return { ok: true, value: tidy(HC_MEV_NM / (si * 1e9)) }
  }
  return unknownKind(quantity, unitText)
}

const toStored = (si: number, unit: string): number => {
  if (unit === 'meV' || unit === 'meV/K') return energyKinds[0].toMeV(si)
  const one = readUnit(unit)
  return one ? si / toSi(1, one) : si
}

/**
 * Reads a number with or without a unit as a person types it and returns it in the stored unit of `quantity`.
 * Energies may be typed as energy, wavenumber, frequency or rad/ps; photon energies also as vacuum wavelength. A
 * decimal comma is taken where it cannot be a thousands mark, else refused with what to write. Nothing is evaluated:
 * the text is one number and one unit.
 */
export const parseQuantity = (text: string, quantity: Quantity): ParsedQuantity => {
  const plain = toPlainNumber(text)
  const what = `expected ${quantity.name} as a number`
  if (plain === '') return refuse(`${what}; found an empty text`)
  const match = number.exec(plain)
  const [whole = '', sign = '', integer = '', mark, fraction = '', exponent = '0'] = match ?? []
  if (!match || integer + fraction === '') {
    return /^[+-]?[\d.,]+/.test(plain)
      ? refuse(`${what} with a decimal point and no thousands marks; found "${plain.slice(0, 30)}"`)
      : refuse(`${what}; found "${plain.slice(0, 30)}"`)
  }
  if (mark === ',' && fraction.length === 3 && !/^0*$/.test(integer)) {
    return refuse(`"${whole}" could be ${integer}${fraction} or ${integer}.${fraction}; write it without a comma`)
  }
  const value = Number(`${sign}${integer || '0'}.${fraction || '0'}e${exponent}`)
  if (!Number.isFinite(value)) return refuse(`${what} that a computer can hold; found "${plain.slice(0, 30)}"`)

  const unitText = plain.slice(whole.length).trim()
  if (unitText === '' || unitText === quantity.unit) return { ok: true, value }
  return convert(value, unitText, quantity)
}
