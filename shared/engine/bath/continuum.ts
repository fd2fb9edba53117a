/**
 * What every kind of continuous bath hands to the engine: a spectral density on angular frequencies, with the few facts
 * about it that quadrature and limits need. Frequencies in rad/ps; J in rad/ps (so that hbar J is an energy).
 * Definition of J: C(t) = (1/pi) Int J(w) [coth(w/2th) cos wt - i sin wt] dw (Mukamel 1995, ch. 8).
 */

export interface Continuum {
  /** True when J is 0 everywhere: the term then says nothing, not even about limits. */
  silent: boolean
  /** J(w) for w > 0. */
  density: (frequency: number) => number
  /** J(w) -> coefficient w^exponent for w -> 0; exponent Infinity (coefficient 0) when J falls faster than any power. */
  low: { exponent: number; coefficient: number }
  /** At and below 1e-7 of this frequency `low` is J(w) to a relative 1e-13, or J contributes nothing. */
  lowScale: number
  /** Above this frequency J contributes nothing at working precision. */
  upper: number
  /**
   * Frequency that bounds what a spectrum or a figure must hold: beyond it J creates fewer than 1e-5 quanta. Far below
   * `upper` where J falls only as a power of w.
   */
  reach: number
  /**
   * Widest panel starting at a frequency on which 20 Legendre polynomials represent J to rounding. Panels are never wider
   * than their start (they double away from 0), so a power of w needs nothing more.
   */
  panelWidth: (start: number) => number
  /** Time on which g0 first varies, ps. */
  firstTime: number
  /**
   * Until this time (ps; Infinity where J is not smooth) g0 oscillates with about this frequency; afterwards, and apart
   * from a `DampedOscillation`, it varies only on the scale of the time itself. Absent where it never oscillates for long.
   */
  ringing?: { frequency: number; until: number }
  /** True where no rule of panel widths is known: panels are then halved until their coefficients have fallen. */
  needsRefinement?: boolean
  /** Frequencies at which J or one of its derivatives jumps (table points); ascending. */
  breaks?: Float64Array
}

/** Adds g0 at one time t >= 0 to out[0] (real) and out[1] (imaginary). */
export type PointBroadening = (timePs: number, out: Float64Array) => void

/** g0 of one term without quadrature, for times from `from` (ps) on. */
export interface ClosedForm {
  addAt: PointBroadening
  from: number
}

/**
 * Part of g0 that oscillates without becoming smooth: Re(re-part) = Re(amplitudeRe e^{-rate t}), and the same for the
 * imaginary part. Complex numbers as [re, im]; the rate is decay + i frequency.
 */
export interface DampedOscillation {
  decay: number
  frequency: number
  amplitudeRe: [number, number]
  amplitudeIm: [number, number]
}

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
