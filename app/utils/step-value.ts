import type { Quantity } from '#shared/schemas/quantity'

/** `fine` is the modifier key, `coarse` the page keys. */
export type StepSize = 'fine' | 'normal' | 'coarse'

const factors: Record<StepSize, number> = { fine: 0.1, normal: 1, coarse: 10 }

/** Power of ten of one normal step: the second significant digit; 1 meV for photon energies, 0.1 from zero. */
const exponentOfStep = (value: number, quantity: Quantity): number => {
  if (quantity.photonEnergy) return 0
  return value === 0 ? (quantity.unit === 'K' ? 0 : -1) : Math.floor(Math.log10(Math.abs(value))) - 1
}

const round = (value: number, exponent: number): number =>
  exponent >= 0 ? Math.round(value / 10 ** exponent) * 10 ** exponent : Number(value.toFixed(Math.min(100, -exponent)))

/** The value some steps up or down, kept inside the range and free of rounding dust. */
export const stepValue = (value: number, steps: number, size: StepSize, quantity: Quantity): number => {
  const exponent = exponentOfStep(value, quantity) + Math.log10(factors[size])
  const moved = round(value + steps * 10 ** exponent, exponent)
  const low = quantity.exclusiveMin ? Math.max(quantity.min, Number.MIN_VALUE) : quantity.min
  // From above, a step below an excluded minimum stays where it was rather than landing on the bound.
  if (quantity.exclusiveMin && moved <= quantity.min) return value
  return Math.min(quantity.max, Math.max(low, moved))
}
