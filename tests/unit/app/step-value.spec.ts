import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { stepValue } from '../../../app/utils/step-value'
import { quantities } from '../../../shared/schemas/quantities'

describe('stepping a value', () => {
  it.each([
    [0.3, 1, 'normal', 'couplingStrength', 0.31],
    [0.3, -1, 'fine', 'couplingStrength', 0.299],
    [0.3, 1, 'coarse', 'couplingStrength', 0.4],
    [1.5, 1, 'normal', 'cutoffEnergyMeV', 1.6],
    [2000, 1, 'normal', 'zeroPhononEnergyMeV', 2001],
    [2000, 1, 'fine', 'zeroPhononEnergyMeV', 2000.1],
    [20, 1, 'normal', 'temperatureK', 21],
    [0, 1, 'normal', 'temperatureK', 1],
    [0, 1, 'normal', 'huangRhys', 0.1],
    [0, -1, 'normal', 'huangRhys', 0],
    [6, 1, 'normal', 'exponent', 6],
  ] as const)('%d by %d %s of %s gives %d', (value, steps, size, key, expected) =>
    expect(stepValue(value, steps, size, quantities[key])).toBe(expected),
  )

  it('never leaves the range and never lands on an excluded bound', () =>
    fc.assert(
      fc.property(
        fc.constantFrom(...Object.values(quantities)),
        fc.double({ noNaN: true, min: 0, max: 1 }),
        fc.integer({ min: -500, max: 500 }),
        fc.constantFrom('fine' as const, 'normal' as const, 'coarse' as const),
        (quantity, fraction, steps, size) => {
          const start = Math.max(quantity.min + fraction * (quantity.max - quantity.min), quantity.min || 1e-9)
          const moved = stepValue(start, steps, size, quantity)
          expect(moved).toBeGreaterThanOrEqual(quantity.min)
          expect(moved).toBeLessThanOrEqual(quantity.max)
          if ('exclusiveMin' in quantity) expect(moved).toBeGreaterThan(quantity.min)
        },
      ),
    ))
})
