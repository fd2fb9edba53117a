import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { quantities } from '../../../shared/schemas/quantities'
import { parseQuantity } from '../../../shared/utils/parse-quantity'

const valueOf = (text: string, key: keyof typeof quantities): number => {
  const parsed = parseQuantity(text, quantities[key])
  if (!parsed.ok) throw new Error(parsed.message)
  return parsed.value
}
const refusalOf = (text: string, key: keyof typeof quantities): string => {
  const parsed = parseQuantity(text, quantities[key])
  return parsed.ok ? `accepted as ${parsed.value}` : parsed.message
}

describe('values with units', () => {
  // Expected values: CODATA 2022 energy equivalents (Mohr, Newell, Taylor, Tiesinga), 1 cm^-1 = 1.239 841 984... e-4 eV,
  // 1 Hz = 4.135 667 696... e-15 eV.
  it.each([
    ['1.2 meV', 'cutoffEnergyMeV', 1.2],
    ['1.2', 'cutoffEnergyMeV', 1.2],
    ['2 eV', 'zeroPhononEnergyMeV', 2000],
    ['350 µeV', 'zeroPhononFwhmMeV', 0.35],
    ['9.7 cm^-1', 'cutoffEnergyMeV', 9.7 * 0.1239841984],
    ['9.7 cm⁻¹', 'cutoffEnergyMeV', 9.7 * 0.1239841984],
    ['9.7 cm-1', 'cutoffEnergyMeV', 9.7 * 0.1239841984],
    ['9.7 1/cm', 'cutoffEnergyMeV', 9.7 * 0.1239841984],
    ['290 GHz', 'modeEnergyMeV', 290 * 4.135667696e-3],
    ['0.5 THz', 'modeEnergyMeV', 0.5 * 4.135667696],
    ['1 rad/ps', 'modeEnergyMeV', 4.135667696 / (2 * Math.PI)],
    ['96.48533212 kJ/mol', 'zeroPhononEnergyMeV', 1000],
    ['620 nm', 'zeroPhononEnergyMeV', 1239841.984 / 620],
    ['0.62 um', 'laserCenterMeV', 1239841.984 / 620],
    ['1.5 ps', 'waitingTimePs', 1.5],
    ['500 fs', 'waitingTimePs', 0.5],
    ['2 ns', 'waitingTimePs', 2000],
    ['20 K', 'temperatureK', 20],
    ['-268.95 °C', 'temperatureK', 4.2],
    ['2 µeV/K', 'acousticBroadeningMeVPerK', 0.002],
    ['1 cm^-1/K', 'acousticBroadeningMeVPerK', 0.1239841984],
    ['1 GHz/K', 'acousticBroadeningMeVPerK', 4.135667696e-3],
    ['0.3', 'couplingStrength', 0.3],
  ] as const)('%s as %s', (text, key, expected) => {
    expect(Math.abs(valueOf(text, key) / expected - 1)).toBeLessThan(1e-9)
  })

  it.each([
    ['500 fs', 'waitingTimePs', 0.5],
    ['0.35 eV', 'zeroPhononEnergyMeV', 350],
    ['1.1 ueV', 'zeroPhononFwhmMeV', 0.0011],
  ] as const)('%s keeps the digits that were typed', (text, key, expected) => {
    expect(valueOf(text, key)).toBe(expected)
  })
})

describe('ways to write a number', () => {
  it.each([
    ['1e-3', 0.001],
    ['1.5 × 10^-3', 0.0015],
    ['1.5×10⁻³ meV', 0.0015],
    ['.5', 0.5],
    ['5.', 5],
    ['+3', 3],
    ['−3', -3],
    ['1,5', 1.5],
    ['0,125 meV', 0.125],
    ['\u00a012\u202fmeV ', 12],
    ['3meV', 3],
    ['2e3meV', 2000],
  ])('%s', (text, expected) => expect(valueOf(text, 'cutoffEnergyMeV')).toBe(expected))
})

describe('refusals say what was found and what to write', () => {
  it.each([
    ['', 'cutoffEnergyMeV', 'found an empty text'],
    ['abc', 'cutoffEnergyMeV', 'found "abc"'],
    ['1,500', 'cutoffEnergyMeV', 'could be 1500 or 1.500'],
    ['1.500,5', 'cutoffEnergyMeV', 'no thousands marks'],
    ['1,2,3', 'cutoffEnergyMeV', 'no thousands marks'],
    ['3 parsec', 'cutoffEnergyMeV', 'found the unit "parsec"'],
    ['3 mev', 'cutoffEnergyMeV', 'meV, eV, cm^-1, GHz, THz or rad/ps'],
    ['620 nm', 'cutoffEnergyMeV', 'a wavelength gives a photon energy'],
    ['0 nm', 'zeroPhononEnergyMeV', 'a wavelength above 0 nm'],
    ['3 1/ps', 'modeEnergyMeV', 'does not say which'],
    ['3 meV', 'waitingTimePs', 'ps, fs or ns'],
    ['3 K', 'cutoffEnergyMeV', 'found the unit "K"'],
    ['0.5 meV', 'huangRhys', 'without a unit'],
    ['2 + 3', 'cutoffEnergyMeV', 'found the unit'],
    ['2 meV * sqrt(4)', 'cutoffEnergyMeV', 'found the unit'],
    ['1e999', 'cutoffEnergyMeV', 'that a computer can hold'],
    ['NaN', 'cutoffEnergyMeV', 'found "NaN"'],
    ['0x10', 'cutoffEnergyMeV', 'found the unit "x10"'],
  ] as const)('%s as %s', (text, key, part) => expect(refusalOf(text, key)).toContain(part))
})

describe('properties', () => {
  const finite = fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e12, max: 1e12 })

  it('a printed number comes back bit for bit, with or without its unit', () =>
    fc.assert(
      fc.property(finite, fc.constantFrom('', ' meV', 'meV'), (value, unit) => {
        const expected = Object.is(value, -0) ? 0 : value
        expect(valueOf(String(expected) + unit, 'cutoffEnergyMeV')).toBe(expected)
      }),
    ))

  it('an energy typed in another unit and converted back agrees to 1e-14', () =>
    fc.assert(
      fc.property(
        fc.double({ noNaN: true, min: 1e-3, max: 1e4 }),
        fc.constantFrom(['eV', 1e3] as const, ['ueV', 1e-3] as const, ['keV', 1e6] as const),
        (value, [unit, factor]) => {
          expect(Math.abs(valueOf(`${value} ${unit}`, 'cutoffEnergyMeV') / (value * factor) - 1)).toBeLessThan(1e-14)
        },
      ),
    ))

  it('any text is either a finite number or a reason', () =>
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme', maxLength: 40 }), (text) => {
        const parsed = parseQuantity(text, quantities.zeroPhononEnergyMeV)
        if (parsed.ok) expect(Number.isFinite(parsed.value)).toBe(true)
        else expect(parsed.message).not.toBe('')
      }),
    ))
})
