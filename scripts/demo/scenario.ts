import type { ParameterSetInput } from '../../shared/schemas/parameter-set'
import type { Role } from '../../shared/schemas/roles'

/**
 * The invented scenario of the demo: two made-up samples of quantum dots with a deformation-potential bath, a soft
 * torsional-like mode and an optical phonon. The numbers are plausible and belong to nothing that was ever measured.
 */

export const demoGroupName = 'Demo group (invented)'

export interface DemoPerson {
  role: Role
  name: string
  email: string
}

export const demoPeople: readonly DemoPerson[] = [
  { role: 'owner', name: 'Demo Owner', email: 'owner@demo.example.org' },
  { role: 'editor', name: 'Demo Editor', email: 'editor@demo.example.org' },
  { role: 'viewer', name: 'Demo Viewer', email: 'viewer@demo.example.org' },
]

const temperaturesK = [4, 20, 50, 100]
const waitingTimesPs = [0, 0.5, 2, 10]

/** Narrow ensemble: zero-phonon line, pedestal and both sidebands stand apart at 4 K. */
export const sampleA1: ParameterSetInput = {
  zeroPhononEnergyMeV: 2050,
  bath: [{ kind: 'powerLaw', couplingStrength: 0.7, exponent: 3, cutoffEnergyMeV: 2, cutoffShape: 'gaussian' }],
  modes: [
    { label: 'torsional-like', energyMeV: 0.9, huangRhys: 0.06 },
    { label: 'optical', energyMeV: 26, huangRhys: 0.12 },
  ],
  zeroPhononFwhmMeV: 0.25,
  acousticBroadeningMeVPerK: 0.002,
  opticalBroadeningMeV: 12,
  opticalPhononEnergyMeV: 26,
  populationLifetimePs: 200,
  ensembleFwhmMeV: 1,
  laser: { centerMeV: 2050, fwhmMeV: 40 },
  temperaturesK,
  waitingTimesPs,
}

/** Wide ensemble: the absorption hides what the cross-diagonal slice still shows. */
export const sampleB2: ParameterSetInput = {
  ...sampleA1,
  zeroPhononEnergyMeV: 1985,
  bath: [{ kind: 'powerLaw', couplingStrength: 0.45, exponent: 3, cutoffEnergyMeV: 1.6, cutoffShape: 'gaussian' }],
  modes: [
    { label: 'torsional-like', energyMeV: 0.9, huangRhys: 0.04 },
    { label: 'optical', energyMeV: 26, huangRhys: 0.08 },
  ],
  zeroPhononFwhmMeV: 0.4,
  ensembleFwhmMeV: 6,
  laser: { centerMeV: 1985, fwhmMeV: 40 },
}

export interface DemoSet {
  name: string
  /** One entry a version, oldest first; the last one is computed. */
  versions: { note: string; parameters: ParameterSetInput }[]
}

export const demoSets: readonly DemoSet[] = [
  {
    name: 'Sample A1 (invented)',
    versions: [
      {
        note: 'First guess from the 4 K absorption (invented)',
        parameters: { ...sampleA1, zeroPhononFwhmMeV: 0.35, modes: sampleA1.modes?.slice(1) },
      },
      { note: 'Narrower line, torsional-like mode added (invented)', parameters: sampleA1 },
    ],
  },
  {
    name: 'Sample B2 (invented)',
    versions: [{ note: 'Wide ensemble (invented)', parameters: sampleB2 }],
  },
  {
    name: 'Sample A1 (invented), no discrete modes',
    versions: [
      {
        note: 'Candidate: acoustic bath alone (invented)',
        parameters: { ...sampleA1, modes: [], waitingTimesPs: [0, 2] },
      },
    ],
  },
  {
    name: 'Sample A1 (invented), exponent 1',
    versions: [
      {
        note: 'Candidate: piezoelectric bath, which leaves no sharp zero-phonon line (invented)',
        parameters: {
          ...sampleA1,
          bath: [
            { kind: 'powerLaw', couplingStrength: 0.12, exponent: 1, cutoffEnergyMeV: 2, cutoffShape: 'exponential' },
          ],
          acousticBroadeningMeVPerK: 0,
          waitingTimesPs: [0, 2],
        },
      },
    ],
  },
]
