/**
 * A parameter set resolved to one temperature.
 *
 * The zero-phonon width that a person gives is the total homogeneous width: gam = Gamma(T) / (2 hbar) already contains
 * the lifetime's share 1/(2 T_1). A population lifetime therefore adds the factor exp(-t_2/T_1) only, and no width;
 * `modelWarnings` says where the given width is smaller than the lifetime allows.
 * Definition of gam: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8. Spec: tests/engine/linewidth.spec.ts.
 */
import type { ParameterSet } from '../schemas/parameter-set'
import { zeroPhononFwhmAt } from './linewidth'
import type { LineModel } from './types'

export const modelAt = (set: ParameterSet, temperatureK: number): LineModel => ({
  bath: set.bath,
  modes: set.modes,
  zeroPhononEnergyMeV: set.zeroPhononEnergyMeV,
  temperatureK,
  zeroPhononFwhmMeV: zeroPhononFwhmAt(set, temperatureK),
  ensembleFwhmMeV: set.ensembleFwhmMeV,
  populationLifetimePs: set.populationLifetimePs ?? Infinity,
  laser: set.laser,
})
