/**
 * What every kind of continuous bath hands to the engine: a spectral density on angular frequencies, with the few facts
 * about it that quadrature and limits need. Frequencies in rad/ps; J in rad/ps (so that hbar J is an energy).
 */

export interface Continuum {
  /** J(w) for w > 0. */
  density: (frequency: number) => number
  /** J(w) -> coefficient w^exponent for w -> 0. */
  low: { exponent: number; coefficient: number }
  /** At and below 1e-7 of this frequency `low` is J(w) to a relative 1e-13. */
  lowScale: number
  /** Above this frequency J contributes nothing at working precision. */
  upper: number
  /** Widest panel on which 20 Legendre polynomials represent J to rounding, wherever panels below are halved towards 0. */
  widestPanel: number
  /** Frequencies at which J or one of its derivatives jumps (table points); ascending. */
  breaks?: Float64Array
}

/** Adds g0 at one time t >= 0 to out[0] (real) and out[1] (imaginary). */
export type PointBroadening = (timePs: number, out: Float64Array) => void

/** Integrals over one term, all in powers of rad/ps; null where they diverge. */
export interface DensityIntegrals {
  /** lambda / hbar = (1/pi) Int J/w dw */
  reorganization: number
  /** Re g0(infinity) = (1/pi) Int J coth(w / 2 th) / w^2 dw */
  plateau: number | null
  /** (1/pi) Int J coth(w / 2 th) dw */
  variance: number | null
  /** (1/pi) Int J w dw */
  third: number | null
}
