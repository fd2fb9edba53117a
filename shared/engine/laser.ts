/**
 * Weight of a finite laser bandwidth on a two-dimensional spectrum at a fixed waiting time.
 *
 *   W(E1, E3) = I(E1) sqrt(I(E3)) [sqrt(I(E3)) of the local oscillator] = I(E1) I(E3),  I = exp(-4 ln 2 (E - E_L)^2/FWHM^2)
 *
 * Pulses 1 and 2 act at E1 (E_b = E1 because E2 = 0), pulse 3 and the local oscillator at E3; the local oscillator is a
 * replica of the pulses and is not divided out. Linear spectra are not weighted.
 * Source: Hamm & Zanni (2011), ch. 4; pulses enter the frequency domain as factors when they do not overlap.
 */
import type { LineModel } from './types'

/** I at the given energies, largest possible value 1; undefined for an infinite bandwidth. */
export const laserIntensity = (laser: LineModel['laser'], energiesMeV: Float64Array): Float64Array | undefined =>
  laser && energiesMeV.map((energy) => Math.exp(-4 * Math.LN2 * ((energy - laser.centerMeV) / laser.fwhmMeV) ** 2))

/** Multiplies values at (E1[i], E3[i]) in place. */
export const weightAlong = (
  values: readonly Float64Array[],
  first: Float64Array | undefined,
  third: Float64Array | undefined,
): void => {
  if (!first || !third) return
  for (const array of values) for (let i = 0; i < array.length; i++) array[i]! *= first[i]! * third[i]!
}

/** Multiplies a row-major map [E1][E3] in place. */
export const weightMap = (values: readonly Float64Array[], intensity: Float64Array | undefined): void => {
  if (!intensity) return
  const n = intensity.length
  for (const array of values) {
    for (let i = 0; i < n; i++) {
      for (let k = 0; k < n; k++) array[i * n + k]! *= intensity[i]! * intensity[k]!
    }
  }
}
