import { describe, expect, it } from 'vitest'
import { homogeneousRate } from '../../shared/engine/coherence-decay'
import { GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS, PLANCK_MEV_PS } from '../../shared/engine/constants'
import { nextPowerOfTwo } from '../../shared/engine/fft'
import { chooseMapGrid } from '../../shared/engine/grid'
import { correctedMap } from '../../shared/engine/map-kernel'
import { isMissing, peakOf, widthOf } from '../../shared/engine/measured'
import { absorptiveOf, mapSlices, reducedCrossDiagonal, rephasingCrossDiagonal } from '../../shared/engine/slices'
import { binEnergies, sliceBins } from '../../shared/engine/stages'
import type { ComplexSeries, LineModel } from '../../shared/engine/types'
import { largest, powerLaw } from './support'
import { lineModel, richModel, tablesFor } from './support/line-model'

const modulus = ({ re, im }: ComplexSeries) => re.map((value, i) => Math.hypot(value, im[i]!))

describe('slices', () => {
  const models: [string, LineModel][] = [
    ['narrow ensemble', richModel({ ensembleFwhmMeV: 0.3 })],
    ['no ensemble', richModel({ ensembleFwhmMeV: 0, temperatureK: 40 })],
    ['wide ensemble', richModel({ ensembleFwhmMeV: 8, populationLifetimePs: 2 })],
    // Without factors: logarithms beyond 300.
    [
      'strong coupling',
      lineModel({ bath: [powerLaw({ couplingStrength: 60 })], temperatureK: 300, ensembleFwhmMeV: 2 }),
    ],
  ]

  it.each(models)('are those of the full map: %s', (_, model) => {
    const [n, padded, stepPs, wait] = [60, 128, 0.04, 0.7]
    const tables = tablesFor(model, wait, stepPs, n)
    const bins = { padded, halfBins: padded / 2, stride: 1 }
    const slices = mapSlices(tables, { across: bins, along: bins })
    for (const key of ['rephasing', 'nonRephasing'] as const) {
      const map = correctedMap(tables[key], bins)
      const scale = largest(modulus(map))
      const errors: number[] = []
      for (let i = 1; i < padded; i++) {
        const along = i * padded + i
        // E1 = D - x/2, E3 = D + x/2: bins mirrored about the centre.
        const across = (padded - i) * padded + i
        const { diagonal, crossDiagonal } = slices
        errors.push(Math.hypot(diagonal[key].re[i]! - map.re[along]!, diagonal[key].im[i]! - map.im[along]!))
        errors.push(
          Math.hypot(crossDiagonal[key].re[i]! - map.re[across]!, crossDiagonal[key].im[i]! - map.im[across]!),
        )
      }
      // The band ends where the ensemble factor is 7e-10.
      expect(largest(errors) / scale).toBeLessThan(2e-9)
    }
    expect(slices.method.method).toBe('band')
  })

  it('give the preview and the run the same rephasing slice', () => {
    const tables = tablesFor(richModel(), 0.7, 0.04, 60)
    const bins = { padded: 256, halfBins: 64, stride: 1 }
    expect(rephasingCrossDiagonal(tables.rephasing, bins).slice).toEqual(
      mapSlices(tables, { across: bins, along: bins }).crossDiagonal.rephasing,
    )
  })
})

describe('strongly inhomogeneous reduction', () => {
  /** The same x from -5 to 5 meV at any width. */
  const reductionFor = (ensembleFwhmMeV: number) => {
    const model = lineModel({ ensembleFwhmMeV, zeroPhononFwhmMeV: 0.5, bath: [powerLaw({ cutoffEnergyMeV: 0.5 })] })
    const stepPs = 4 / ensembleFwhmMeV / 16
    const tables = tablesFor(model, 0.5, stepPs, Math.ceil(18 / stepPs)).rephasing
    const padded = nextPowerOfTwo(tables.samples)
    const halfBins = 2 * Math.round((2.5 * padded * stepPs) / PLANCK_MEV_PS / 2)
    const bins = { padded, halfBins, stride: 1 }
    const reduced = reducedCrossDiagonal(tables, bins)!
    const found = reduced.slice()
    const { slice, method } = rephasingCrossDiagonal(tables, bins)
    expect(method.method).toBe('band')
    expect(method.reductionError).toBe(reduced.error)
    const errors = found.re.map((v, i) => Math.hypot(v - slice.re[i]!, found.im[i]! - slice.im[i]!))
    return { actual: largest(errors) / largest(modulus(slice)), estimate: reduced.error }
  }

  it('falls with the square of the ensemble width, and its estimate bounds the error', () => {
    const found = [16, 32, 64].map(reductionFor)
    for (const [k, { actual, estimate }] of found.entries()) {
      expect(estimate).toBeGreaterThan(actual)
      expect(estimate).toBeLessThan(actual * 30)
      const wider = found[k + 1]
      if (wider) expect(actual / wider.actual).toBeGreaterThan(3)
    }
  })

  it('does not exist without an ensemble', () => {
    expect(
      reducedCrossDiagonal(tablesFor(lineModel(), 0, 0.1, 40).rephasing, { padded: 64, halfBins: 32, stride: 1 }),
    ).toBeUndefined()
  })
})

// Widths of x = E3 - E1 through (E0, E0) for pure dephasing, in units of hbar gam, by the Faddeeva function; the diagonal in E.
// Siemens et al., Opt. Express 18, 17699 (2010); the rows by integration to 4 to 5 digits.
const widths = [
  { ratio: 0, magnitude: 4, real: 1.9435, absorptive: 2.5744, diagonal: 2 },
  { ratio: 0.1, magnitude: 4.039, real: 1.961, absorptive: 2.604, diagonal: 2.03 },
  { ratio: 0.3, magnitude: 4.297, real: 2.076, absorptive: 2.783, diagonal: 2.238 },
  { ratio: 1, magnitude: 5.421, real: 2.57, absorptive: 3.386, diagonal: 3.601 },
  { ratio: 3, magnitude: 6.531, real: 3.229, absorptive: 3.85, diagonal: 8.193 },
  { ratio: 10, magnitude: 6.882, real: 3.712, absorptive: 3.982, diagonal: 24.63 },
  { ratio: 30, magnitude: 6.923, real: 3.897, absorptive: 3.998, diagonal: 71.7 },
]

describe('widths of slices of pure dephasing', () => {
  it.each(widths)('sig/gam = $ratio', ({ ratio, magnitude, real, absorptive, diagonal }) => {
    const zeroPhononFwhmMeV = 0.4
    const model = lineModel({
      zeroPhononFwhmMeV,
      ensembleFwhmMeV: (ratio * GAUSSIAN_FWHM_PER_SIGMA * zeroPhononFwhmMeV) / 2,
    })
    expect(homogeneousRate(model) * HBAR_MEV_PS).toBeCloseTo(0.2, 12)
    const choice = chooseMapGrid(model, 0)
    if (!choice.ok) throw new Error(choice.issues[0]!.message)
    const { grid } = choice
    const bins = sliceBins(grid)
    const slices = mapSlices(tablesFor(model, 0, grid.timeStepPs, grid.samples), bins)
    const shifts = binEnergies(bins.across, grid.spanMeV).map((offset) => 2 * offset)
    const energies = binEnergies(bins.along, grid.spanMeV)
    const widthOfCurve = (values: Float64Array, energiesMeV: Float64Array): number => {
      const curve = { energiesMeV, values }
      const peak = peakOf(curve)
      if (isMissing(peak)) throw new Error(peak.reason)
      const width = widthOf(curve, peak)
      if (isMissing(width)) throw new Error(width.reason)
      return width.fwhmMeV / 0.2
    }
    const { rephasing, nonRephasing } = slices.crossDiagonal
    const within = (found: number, expected: number) => expect(Math.abs(found / expected - 1)).toBeLessThan(5e-4)
    within(widthOfCurve(modulus(rephasing), shifts), magnitude)
    within(widthOfCurve(rephasing.re, shifts), real)
    within(widthOfCurve(absorptiveOf(rephasing, nonRephasing), shifts), absorptive)
    within(widthOfCurve(slices.diagonal.rephasing.re, energies), diagonal)
  })
})
