/** Answers of the command line about spheres, orientations and simple line widths. */
import type { RequestOf } from '../schemas/engine-request'
import { isotropicFactor, linearPolarizations, type Vector } from '../engine/fine-structure/orientation'
import { kuboFwhm, lorentzianFwhm, voigtFwhm } from '../engine/simple-widths'
import { spheroidalEigenvalues, torsionalEigenvalues } from '../engine/sphere/free-sphere'
import { sphereModes } from '../engine/sphere/sphere-modes'
import type { Answer } from './answer'

const UNIT = '1, x = w R / v_T; n counts the non-zero roots from 0'

export const answerTorsional = ({ parameters: { l, n } }: RequestOf<'sphereTorsionalEigenvalues'>): Answer => ({
  values: {
    unit: UNIT,
    modes: l.flatMap((order) => {
      const roots = torsionalEigenvalues(order, Math.max(...n) + 1)
      return n.map((index) => ({ l: order, n: index, eigenvalueX: roots[index]! }))
    }),
  },
})

export const answerSpheroidal = ({
  parameters: { velocityRatios, l, n },
}: RequestOf<'sphereSpheroidalEigenvalues'>): Answer => ({
  values: {
    unit: `${UNIT} (the rigid translation of l = 1 left out)`,
    modes: velocityRatios.flatMap((velocityRatio) =>
      l.flatMap((order) => {
        const roots = spheroidalEigenvalues(velocityRatio, order, Math.max(...n) + 1)
        return n.map((index) => ({ velocityRatio, l: order, n: index, eigenvalueX: roots[index]! }))
      }),
    ),
  },
})

export const answerSphereEnergies = ({ parameters }: RequestOf<'sphereModeEnergies'>): Answer => {
  const { radiusNm, longitudinalVelocityMPerS, transverseVelocityMPerS, torsionalL, spheroidalL, n } = parameters
  // A free sphere's frequencies do not depend on its density.
  const core = { densityKgPerM3: 1000, longitudinalVelocityMPerS, transverseVelocityMPerS }
  const of = (family: 'spheroidal' | 'torsional', orders: readonly number[]) =>
    orders.flatMap((l) => {
      const modes = sphereModes({ radiusNm, core }, family, l, Math.max(...n) + 1)
      return n.map((index) => {
        const { energyMeV, wavenumberPerCm, frequencyGHz } = modes[index]!
        return { family, l, n: index, energyMeV, wavenumberPerCm, frequencyGHz }
      })
    })
  return { values: { modes: [...of('spheroidal', spheroidalL), ...of('torsional', torsionalL)] } }
}

const axisVectors: Record<string, Vector> = { x: [1, 0, 0], y: [0, 1, 0], z: [0, 0, 1] }

type Row = NonNullable<RequestOf<'isotropicOrientationalFactor'>['parameters']['rows']>[number]

const of = (angles: Row['polarizationAnglesDeg'], ...dipoles: Row['dipoles'][]): Row[] =>
  dipoles.map((entry) => ({ polarizationAnglesDeg: angles, dipoles: entry }))

/** Answered when no rows are asked for: the four usual schemes, the magic angle in the second pulse, one general case. */
const usualRows: Row[] = [
  ...of([0, 0, 0, 0], 'xxxx', 'xyxy'),
  ...of([0, 90, 0, 90], 'xxyy', 'xyyx'),
  ...of([0, 90, 90, 0], 'xxxx', 'xyxy'),
  ...of([0, 0, 90, 90], 'xxyy', 'xyyx'),
  ...of([0, 54.7356, 0, 0], 'xxxx', 'xyxy'),
  ...of(
    [0, 30, 60, 15],
    [
      [1, 0, 0],
      [0.6, 0.8, 0],
      [0, 1, 0],
      [0, 0.6, 0.8],
    ],
  ),
]

export const answerOrientation = ({ parameters }: RequestOf<'isotropicOrientationalFactor'>): Answer => ({
  values: {
    unit: '1',
    rows: (parameters.rows ?? usualRows).map(({ polarizationAnglesDeg, dipoles }) => {
      const vectors = typeof dipoles === 'string' ? [...dipoles].map((letter) => axisVectors[letter]!) : dipoles
      const factor = isotropicFactor(
        linearPolarizations(polarizationAnglesDeg),
        vectors as [Vector, Vector, Vector, Vector],
      )
      return { polarizationAnglesDeg, dipoles, factor }
    }),
  },
})

export const answerKubo = ({ parameters }: RequestOf<'kuboFwhm'>): Answer => ({
  values: {
    rows: parameters.rows.map(({ fluctuationAmplitudeMeV, correlationTimePs, regime }) => ({
      fluctuationAmplitudeMeV,
      correlationTimePs,
      ...kuboFwhm(fluctuationAmplitudeMeV, correlationTimePs, regime),
    })),
  },
})

export const answerVoigt = ({ parameters }: RequestOf<'voigtFwhm'>): Answer => ({
  values: {
    rows: parameters.rows.map((row) => ({ ...row, fwhmMeV: voigtFwhm(row.lorentzianFwhmMeV, row.gaussianFwhmMeV) })),
  },
})

export const answerLorentzian = ({ parameters }: RequestOf<'lorentzianFwhm'>): Answer => ({
  values: { fwhmMeV: parameters.coherenceTimesPs.map(lorentzianFwhm) },
})
