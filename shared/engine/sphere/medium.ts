/** An isotropic elastic medium in SI units. Source of the relations: Landau & Lifshitz, Theory of Elasticity (1986), section 22. */
export interface Medium {
  densityKgPerM3: number
  longitudinalVelocityMPerS: number
  transverseVelocityMPerS: number
}

/** A sphere: core, optional shell around it, optional infinite matrix around both. */
export interface LayeredSphere {
  radiusNm: number
  core: Medium
  shell?: Medium & { thicknessNm: number }
  matrix?: Medium
}

/** Lame constants, Pa: mu = rho v_T^2, lambda = rho v_L^2 - 2 mu. */
export const lameOf = (medium: Medium): { lambda: number; mu: number } => {
  const mu = medium.densityKgPerM3 * medium.transverseVelocityMPerS ** 2
  return { mu, lambda: medium.densityKgPerM3 * medium.longitudinalVelocityMPerS ** 2 - 2 * mu }
}

export type SphereFamily = 'torsional' | 'spheroidal'

export interface SphereMode {
  family: SphereFamily
  /** Angular order. */
  l: number
  /** Counts the non-zero roots of one family and l from 0. */
  n: number
  /** Angular frequency, rad/ps. */
  radPerPs: number
  /** Amplitude decay rate, 1/ps: the mode varies as exp(-i w t - rate t). 0 for a free surface. */
  decayPerPs: number
  energyMeV: number
  wavenumberPerCm: number
  frequencyGHz: number
}
