/**
 * Lorentzian wings that a sampled linear spectrum folds back into its span.
 *
 * Sampling with step dt adds every image A(E + m Omega), m != 0, Omega = 2 pi hbar/dt. Far from the line
 *   A(y) = (h/pi) [1/(y-m1)^2 + (3 m2 - h^2)/(y-m1)^4 + 4 m3/(y-m1)^5 + ...],  h = hbar gam,
 * with the mean m1, variance m2 and third central moment m3 of the spectrum without gam. The sums over m are
 *   sum 1/(y + m Omega)^2 = (pi/Omega)^2 f(z),  f(z) = 1/sin^2 z - 1/z^2,  z = pi (y - m1)/Omega,
 * and its second and third derivatives. The constant h dt^2/(12 pi hbar^2) of the plain trapezoid is the term z = 0.
 *
 * Derivation: Poisson summation; the same numbers follow from the Euler-Maclaurin end terms (Davis & Rabinowitz, Methods of
 * Numerical Integration, 2nd ed. 1984, 2.9). What is left is the fourth moment.
 */

export interface WingMoments {
  /** Mean, variance (meV^2) and third central moment (meV^3) of phonons and ensemble; 0 where they do not exist. */
  mean: number
  variance: number
  third: number
}

/** Below this |z| the closed forms cancel and the series in z^2 serve; they meet to 1e-9. */
const SERIES_BELOW = 0.35

/** [f, f'', f'''] of f(z) = 1/sin^2 z - 1/z^2. */
const wingTerms = (z: number, out: Float64Array): void => {
  const q = z * z
  if (Math.abs(z) < SERIES_BELOW) {
    // f = 1/3 + z^2/15 + 2 z^4/189 + z^6/675 + 2 z^8/10395 + 1382 z^10/58046625
    out[0] = 1 / 3 + q * (1 / 15 + q * (2 / 189 + q * (1 / 675 + q * (2 / 10395 + (q * 1382) / 58046625))))
    out[1] = 2 / 15 + q * (24 / 189 + q * (30 / 675 + q * (112 / 10395 + (q * 124380) / 58046625)))
    out[2] = z * (48 / 189 + q * (120 / 675 + q * (672 / 10395 + (q * 995040) / 58046625)))
    return
  }
  const s = Math.sin(z)
  const c = 1 / (s * s)
  const r = 1 / q
  out[0] = c - r
  out[1] = 6 * c * c - 4 * c - 6 * r * r
  out[2] = (-24 * c * c + 8 * c) * (Math.cos(z) / s) + (24 * r * r) / z
}

const terms = new Float64Array(3)

/** What folding adds at the energy E0 + offset, 1/meV; offset within half a span. */
export const foldedWings = (offsetMeV: number, spanMeV: number, halfWidthMeV: number, moments: WingMoments): number => {
  if (halfWidthMeV === 0) return 0
  const unit = Math.PI / spanMeV
  wingTerms((offsetMeV - moments.mean) * unit, terms)
  const second = moments.variance - (halfWidthMeV * halfWidthMeV) / 3
  const sum = terms[0]! + ((second * unit * unit) / 2) * terms[1]! - ((moments.third * unit ** 3) / 6) * terms[2]!
  return (halfWidthMeV / Math.PI) * unit * unit * sum
}
