import { describe, expect, it } from 'vitest'
import {
  huangRhysLineWeights,
  moments,
  reorganizationEnergyMeV,
  zeroPhononWeight,
} from '../../shared/engine/bath-integrals'
import { lineBroadeningAt } from '../../shared/engine/line-broadening'
import type { Phonons } from '../../shared/engine/types'
import { BathTermSchema, ModeSchema } from '../../shared/schemas/parameter-set'
import reference from './reference/independent-values.json'
import lineShapes from './reference/line-shape-values.json'
import { powerLaw, relativeError } from './support'

interface Tolerance {
  relative: number
  absolute?: number
}
interface Parameters {
  bath?: unknown[]
  modes?: unknown[]
  temperatureK: number
  ensembleFwhmMeV?: number
}
interface Case {
  id: string
  quantity: string
  parameters: Parameters
  samples?: { points: number[] }
  values: Record<string, unknown>
  tolerance: Tolerance
}

/** The set's own schema reads the parameters, so that the cases also prove the field names. */
const phononsOf = ({ bath = [], modes = [] }: Parameters): Phonons => ({
  bath: bath.map((term) => BathTermSchema.parse(term)),
  modes: modes.map((mode) => ModeSchema.parse(mode)),
})

const expectWithin = (
  found: number | null,
  expected: unknown,
  { relative, absolute = 0 }: Tolerance,
  where: string,
) => {
  expect(found, where).not.toBeNull()
  expect(Math.abs(found! - Number(expected)), where).toBeLessThanOrEqual(
    absolute + relative * Math.abs(Number(expected)),
  )
}

const expectSeries = (found: Float64Array, expected: unknown, tolerance: Tolerance) => {
  const values = expected as number[]
  expect(found).toHaveLength(values.length)
  values.forEach((value, index) => expectWithin(found[index]!, value, tolerance, `point ${index}`))
}

const checks: Record<string, (entry: Case) => void> = {
  lineBroadeningG0: ({ parameters, samples, values, tolerance }) => {
    const found = lineBroadeningAt(phononsOf(parameters), parameters.temperatureK, Float64Array.from(samples!.points))
    expectSeries(found.re, values.real, tolerance)
    expectSeries(found.im, values.imag, tolerance)
  },
  zeroPhononWeight: ({ parameters, values, tolerance }) => {
    const found = zeroPhononWeight(phononsOf(parameters), parameters.temperatureK)
    for (const key of ['weight', 'debyeWallerFactor', 'exponentOfContinuousBath'] as const) {
      if (key in values) expectWithin(found[key], values[key], tolerance, key)
    }
  },
  moments: ({ parameters, values, tolerance }) => {
    const found = moments(phononsOf(parameters), parameters.temperatureK, parameters.ensembleFwhmMeV)
    for (const [key, value] of Object.entries(found)) expectWithin(value as number | null, values[key], tolerance, key)
  },
  reorganizationEnergy: ({ parameters, values, tolerance }) =>
    expectWithin(reorganizationEnergyMeV(phononsOf(parameters)), values.reorganizationEnergyMeV, tolerance, 'lambda'),
  huangRhysLineWeights: ({ parameters, samples, values, tolerance }) =>
    expectSeries(
      huangRhysLineWeights(phononsOf(parameters).modes[0]!, parameters.temperatureK, samples!.points),
      values.weight,
      tolerance,
    ),
}

describe('independent reference values, at their own tolerances', () => {
  for (const entry of reference.cases as unknown as Case[]) {
    it(entry.id, () => {
      expect.hasAssertions()
      checks[entry.quantity]!(entry)
    })
  }
})

describe('line-shape values with twelve digits', () => {
  // J = eta w exp(-w/wc) and eta w^3/wc^2 exp(-w/wc), so a = eta/pi.
  const termOf = (row: { eta: number; wc_meV: number }, exponent: number) =>
    powerLaw({ couplingStrength: row.eta / Math.PI, exponent, cutoffEnergyMeV: row.wc_meV, cutoffShape: 'exponential' })

  for (const [name, exponent, rows] of [
    ['ohmic', 1, lineShapes.ohmic_s1],
    ['super-ohmic', 3, lineShapes.superohmic_s3],
  ] as const) {
    it(`${name} g0 and its linear term`, () => {
      for (const row of rows) {
        const phonons = { bath: [termOf(row, exponent)], modes: [] }
        const found = lineBroadeningAt(phonons, row.T_K, Float64Array.of(row.t_ps))
        expect(relativeError(found.re[0]!, row.Re_g)).toBeLessThan(1e-11)
        // The table's g carries -i lambda t / hbar.
        const linear = (row.lambda_meV / 0.6582119569509066) * row.t_ps
        expect(relativeError(found.im[0]! - linear, row.Im_g, linear)).toBeLessThan(1e-11)
      }
    })
  }

  it('super-ohmic zero-phonon weight, second and third moments', () => {
    for (const row of lineShapes.superohmic_s3) {
      const found = zeroPhononWeight({ bath: [termOf(row, 3)], modes: [] }, row.T_K)
      expect(relativeError(found.weight!, row.zpl_weight)).toBeLessThan(2e-11)
    }
    for (const row of lineShapes.moments) {
      const at = (exponent: number) => moments({ bath: [termOf(row, exponent)], modes: [] }, row.T_K)
      expect(relativeError(at(1).varianceMeV2!, row.ohmic_var_meV2)).toBeLessThan(1e-11)
      expect(relativeError(at(3).varianceMeV2!, row.super_var_meV2)).toBeLessThan(1e-11)
      expect(relativeError(at(1).thirdCentralMomentAbsorptionMeV3!, row.third_moment_ohmic)).toBeLessThan(1e-11)
      expect(relativeError(at(3).thirdCentralMomentAbsorptionMeV3!, row.third_moment_super)).toBeLessThan(1e-11)
    }
  })
})
