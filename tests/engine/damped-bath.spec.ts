import { describe, expect, it } from 'vitest'
import { moments, thermalWidthMeV, zeroPhononWeight } from '../../shared/engine/bath-integrals'
import { overdampedClosedForm, overdampedContinuum } from '../../shared/engine/bath/overdamped'
import { underdampedClosedForm, underdampedContinuum } from '../../shared/engine/bath/underdamped'
import type { ClosedForm, Continuum } from '../../shared/engine/bath/continuum'
import { BOLTZMANN_MEV_PER_K, thermalFrequencyOf } from '../../shared/engine/constants'
import { digammaExcess } from '../../shared/engine/digamma'
import { buildFrequencyPanels } from '../../shared/engine/frequency-panels'
import { lineBroadening, lineBroadeningAt } from '../../shared/engine/line-broadening'
import type { OverdampedTerm, UnderdampedTerm } from '../../shared/schemas/parameter-set'
import { BathTermSchema } from '../../shared/schemas/parameter-set'
import overdampedFixture from './reference/overdamped-broadening.json'
import underdampedFixture from './reference/underdamped-broadening.json'
import reference from './reference/line-shape-values.json'
import { largest, relativeError } from './support'

const overdamped = (reorganizationEnergyMeV: number, relaxationEnergyMeV: number): OverdampedTerm => ({
  kind: 'overdamped',
  reorganizationEnergyMeV,
  relaxationEnergyMeV,
})
const underdamped = (huangRhys: number, energyMeV: number, dampingEnergyMeV: number): UnderdampedTerm => ({
  kind: 'underdamped',
  huangRhys,
  energyMeV,
  dampingEnergyMeV,
})
type Term = OverdampedTerm | UnderdampedTerm
const g0 = (term: Term, temperatureK: number, timesPs: number[]) =>
  lineBroadeningAt({ bath: [term], modes: [] }, temperatureK, Float64Array.from(timesPs))

/** Largest difference between a closed form and quadrature, relative to max(1, |g0|), at and after its first time. */
const methodDifference = (closed: ClosedForm, continuum: Continuum, temperatureK: number): number => {
  const times = [1, 1.5, 4, 30, 1000].map((factor) => factor * closed.from).filter((time) => time < 2000)
  const panels = buildFrequencyPanels([continuum], thermalFrequencyOf(temperatureK), times.at(-1)!)
  return largest(
    times.map((time) => {
      const [a, b] = [new Float64Array(2), new Float64Array(2)]
      closed.addAt(time, a)
      panels.addAt(time, b)
      return Math.hypot(a[0]! - b[0]!, a[1]! - b[1]!) / Math.max(1, Math.hypot(...b))
    }),
  )
}

describe('overdamped bath', () => {
  it('equals mpmath quadrature of the definition within 2e-13', () => {
    expect(overdampedFixture.cases).toHaveLength(9)
    for (const { temperatureK, timesPs, re, im, ...term } of overdampedFixture.cases) {
      const found = g0({ kind: 'overdamped', ...term }, temperatureK, timesPs)
      timesPs.forEach((time, index) => {
        const where = `${JSON.stringify(term)}, ${temperatureK} K, ${time} ps`
        const size = Math.hypot(re[index]!, im[index]!)
        expect(relativeError(found.re[index]!, re[index]!, 1e-3 * size), where).toBeLessThan(2e-13)
        expect(relativeError(found.im[index]!, im[index]!), where).toBeLessThan(2e-13)
      })
    }
  })

  it('equals the reference values (twelve digits), also at 4 K where ten Matsubara terms are 49 % low', () => {
    for (const row of reference.drude_lorentz) {
      const found = g0(overdamped(row.lambda_meV, row.Gamma_meV), row.T_K, [row.t_ps])
      // The relaxation energy is printed with twelve digits.
      expect(relativeError(found.re[0]!, row.Re_g)).toBeLessThan(3e-11)
      const linear = (row.lambda_meV / 0.6582119569509066) * row.t_ps
      expect(relativeError(found.im[0]! - linear, row.Im_g)).toBeLessThan(3e-11)
    }
  })

  it('agrees between the resummed series and quadrature, also at relaxation rates that meet a Matsubara frequency', () => {
    for (const temperatureK of [1e-3, 4, 300]) {
      const matsubara = 2 * Math.PI * BOLTZMANN_MEV_PER_K * temperatureK
      for (const ratio of [1e-3, 0.4, 0.5, 1 - 1e-12, 1, 1 + 1e-9, 2, 7.5, 30]) {
        const relaxation = ratio * matsubara
        const term = overdamped(relaxation, relaxation)
        const closed = overdampedClosedForm(term, thermalFrequencyOf(temperatureK))!
        expect(methodDifference(closed, overdampedContinuum(term), temperatureK)).toBeLessThan(2e-13)
      }
    }
  })

  it('ends as a straight line of the thermal width 4 lambda k_B T / (hbar G)', () => {
    const term = overdamped(0.2, 5)
    const found = zeroPhononWeight({ bath: [term], modes: [] }, 100)
    expect(found.weight).toBeNull()
    expect(relativeError(found.thermalWidthMeV!, (4 * 0.2 * BOLTZMANN_MEV_PER_K * 100) / 5)).toBeLessThan(1e-14)
    const { re } = g0(term, 100, [90, 100])
    expect(relativeError(((re[1]! - re[0]!) / 10) * 2 * 0.6582119569509066, found.thermalWidthMeV!)).toBeLessThan(1e-10)
  })

  it('has a mean but no finite variance', () => {
    const found = moments({ bath: [overdamped(3, 1)], modes: [] }, 77)
    expect(found.firstMomentAbsorptionMeV).toBeCloseTo(3, 13)
    expect(found.varianceMeV2).toBeNull()
    expect(found.thirdCentralMomentAbsorptionMeV3).toBeNull()
  })

  it('sums 1/(k(k + x)) to psi(1 + x) - psi(1)', () => {
    // Recurrence psi(1 + x) = psi(x) + 1/x and duplication give these exactly: NIST Handbook (2010), 5.4.15 and 5.4.14.
    expect(relativeError(digammaExcess(0.5), 2 - 2 * Math.LN2)).toBeLessThan(1e-15)
    expect(relativeError(digammaExcess(3), 1 + 1 / 2 + 1 / 3)).toBeLessThan(1e-15)
    expect(relativeError(digammaExcess(1e-9), (Math.PI ** 2 / 6) * 1e-9, 0)).toBeLessThan(1e-8)
    expect(digammaExcess(0)).toBe(0)
  })
})

describe('underdamped oscillator', () => {
  it('equals mpmath quadrature of the definition within 1e-12', () => {
    expect(underdampedFixture.cases).toHaveLength(7)
    for (const { temperatureK, timesPs, re, im, ...term } of underdampedFixture.cases) {
      const found = g0({ kind: 'underdamped', ...term }, temperatureK, timesPs)
      timesPs.forEach((time, index) => {
        const where = `${JSON.stringify(term)}, ${temperatureK} K, ${time} ps`
        const size = Math.max(1, Math.hypot(re[index]!, im[index]!))
        expect(relativeError(found.re[index]!, re[index]!, size), where).toBeLessThan(1e-12)
        expect(relativeError(found.im[index]!, im[index]!, size), where).toBeLessThan(1e-12)
      })
    }
  })

  it('agrees between the closed form and quadrature from weak to nearly critical damping', () => {
    for (const temperatureK of [0.5, 4, 300]) {
      for (const damping of [1e-3, 0.1, 1, 3.9]) {
        const term = underdamped(0.5, 2, damping)
        const closed = underdampedClosedForm(term, thermalFrequencyOf(temperatureK))!
        expect(methodDifference(closed, underdampedContinuum(term), temperatureK)).toBeLessThan(2e-12)
      }
    }
  })

  it('goes over into the discrete mode as the damping vanishes', () => {
    const times = [0.05, 0.4, 1.1]
    const mode = { label: '', energyMeV: 4, huangRhys: 0.3 }
    const exact = lineBroadeningAt({ bath: [], modes: [mode] }, 30, Float64Array.from(times))
    const error = (damping: number) => {
      const found = g0(underdamped(0.3, 4, damping), 30, times)
      return largest(times.map((_, index) => Math.abs(found.re[index]! - exact.re[index]!)))
    }
    expect(error(1e-3)).toBeLessThan(2e-3)
    expect(error(1e-3) / error(1e-2)).toBeCloseTo(0.1, 2)
  })

  it('has the moments of a mode of energy E: third central S E^3, and a thermal width 4 S (G/E) k_B T', () => {
    const phonons = { bath: [underdamped(1, 26, 1)], modes: [] }
    const found = moments(phonons, 300)
    expect(found.firstMomentAbsorptionMeV).toBeCloseTo(26, 11)
    expect(relativeError(found.thirdCentralMomentAbsorptionMeV3!, 26 ** 3)).toBeLessThan(1e-13)
    // Within a few percent of the undamped mode's S E^2 (2n + 1).
    expect(relativeError(found.varianceMeV2!, 26 ** 2 * 2.15347680108)).toBeLessThan(0.03)
    expect(thermalWidthMeV(phonons, 300)).toBeCloseTo(3.977, 3)
    expect(zeroPhononWeight(phonons, 300).weight).toBeNull()
  })

  it('refuses a damping of twice the energy and names the field', () => {
    const parsed = BathTermSchema.safeParse(underdamped(0.3, 4, 8))
    expect(parsed.success).toBe(false)
    expect(parsed.error!.issues[0]).toMatchObject({ path: ['dampingEnergyMeV'] })
    expect(parsed.error!.issues[0]!.message).toMatch(/below twice the energy \(8 meV\).*found 8 meV/)
  })
})

describe('grids of damped terms', () => {
  for (const term of [
    overdamped(5, 0.4),
    underdamped(0.3, 4, 0.3),
    underdamped(1, 26, 1),
    underdamped(0.5, 3, 5.999),
  ]) {
    for (const temperatureK of [0, 4, 300]) {
      it(`${JSON.stringify(term)}, ${temperatureK} K`, () => {
        const grid = { stepPs: 0.01, samples: 8192 }
        const whole = lineBroadening({ bath: [term], modes: [] }, temperatureK, grid)
        const indices = [0, 1, 2, 7, 40, 41, 300, 2000, 5001, 8191]
        const single = g0(
          term,
          temperatureK,
          indices.map((index) => index * grid.stepPs),
        )
        indices.forEach((index, k) => {
          const size = Math.max(1, Math.hypot(single.re[k]!, single.im[k]!))
          const error = Math.hypot(whole.re[index]! - single.re[k]!, whole.im[index]! - single.im[k]!) / size
          expect(error).toBeLessThan(1e-11)
          expect(error).toBeLessThanOrEqual(whole.errorEstimate)
        })
        expect(whole.method).toContain('piecewise polynomials')
        expect(whole.re.every((value) => value >= 0)).toBe(true)
      })
    }
  }
})
