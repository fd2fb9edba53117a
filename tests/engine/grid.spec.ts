import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { thermalWidthMeV } from '../../shared/engine/bath-integrals'
import { decayWindow, linearDecay, octaveTimes, withEnsemble } from '../../shared/engine/coherence-decay'
import { GAUSSIAN_FWHM_PER_SIGMA, PLANCK_MEV_PS } from '../../shared/engine/constants'
import { chooseLinearGrid, chooseMapGrid, type GridResult, type SpectralGrid } from '../../shared/engine/grid'
import { sidebandReach } from '../../shared/engine/sideband-reach'
import { limits } from '../../shared/utils/limits'
import { arbitraryPhonons, arbitraryTemperature } from './arbitrary'
import { powerLaw } from './support'
import { lineModel, richModel } from './support/line-model'

const gridOf = (result: GridResult): SpectralGrid => {
  if (!result.ok) throw new Error(result.issues.map(({ message }) => message).join())
  return result.grid
}
const refusalOf = (result: GridResult) => {
  if (result.ok) throw new Error('expected a refusal')
  return result
}

describe('windows', () => {
  const times = octaveTimes(1e-3, 1e4)

  it('are 18.2 ps per meV of width for a millionth of a Lorentzian signal', () => {
    const model = lineModel({ zeroPhononFwhmMeV: 2 })
    expect(decayWindow(linearDecay(model, times), 1e-6, 0)).toBeCloseTo(18.19 / 2, 2)
  })

  it('are about 8 ps per meV for a Gaussian one', () => {
    const model = lineModel({ zeroPhononFwhmMeV: 0, ensembleFwhmMeV: 2 })
    const window = decayWindow(withEnsemble(linearDecay(model, times), model), 1e-6, 0)
    // exp(-D) = 1e-6 at 8.15 ps/FWHM; its integral falls a little faster.
    expect(window).toBeGreaterThan(7 / 2)
    expect(window).toBeLessThan(8.3 / 2)
  })

  it('follow a thermal width, and end for no other bath', () => {
    const thermal = lineModel({ zeroPhononFwhmMeV: 0, temperatureK: 77, bath: [powerLaw({ exponent: 1 })] })
    expect(decayWindow(linearDecay(thermal, times), 1e-6, 0)).toBeLessThan(10)
    for (const exponent of [2.5, 3, 5]) {
      const bound = lineModel({ zeroPhononFwhmMeV: 0, temperatureK: 77, bath: [powerLaw({ exponent })] })
      expect(decayWindow(linearDecay(bound, times), 1e-6, 0)).toBe(Infinity)
    }
    const cold = lineModel({ zeroPhononFwhmMeV: 0, temperatureK: 0, bath: [powerLaw({ exponent: 1 })] })
    expect(decayWindow(linearDecay(cold, times), 1e-6, 0)).toBe(Infinity)
  })
})

describe('reach of sidebands', () => {
  it('bounds the Poisson progression of a mode', () => {
    const model = lineModel({ temperatureK: 0, modes: [{ label: '', energyMeV: 26, huangRhys: 0.5 }] })
    const reach = sidebandReach(model)
    expect(reach.below(1e-9)).toBeLessThan(0.2)
    let [tail, term, n] = [1, Math.exp(-0.5), 0]
    while (tail - term > 1e-6) {
      tail -= term
      n++
      term *= 0.5 / n
    }
    // All lines above n quanta together weigh less than 1e-6.
    expect(reach.above(1e-6)).toBeGreaterThanOrEqual(26 * n - 26)
    expect(reach.above(1e-6)).toBeLessThan(26 * (n + 2))
  })

  it('is that of a normal distribution for an ensemble', () => {
    const sigma = 4 / GAUSSIAN_FWHM_PER_SIGMA
    const reach = sidebandReach(lineModel({ ensembleFwhmMeV: 4 }))
    expect(reach.above(1e-6) / (sigma * Math.sqrt(2 * Math.log(1e6)))).toBeCloseTo(1, 1)
    expect(reach.below(1e-6)).toBe(reach.above(1e-6))
  })

  it('is nothing without phonons and ensemble', () => {
    expect(sidebandReach(lineModel()).above(1e-12)).toBe(0)
  })
})

describe('grids', () => {
  it('hold sidebands, window and ten points a width', () => {
    for (const model of [
      richModel(),
      richModel({ temperatureK: 200 }),
      lineModel(),
      lineModel({ ensembleFwhmMeV: 5 }),
    ]) {
      for (const grid of [gridOf(chooseLinearGrid(model)), gridOf(chooseMapGrid(model, 0))]) {
        expect(grid.spanMeV).toBeCloseTo(PLANCK_MEV_PS / grid.timeStepPs, 9)
        expect(grid.spanMeV / 2).toBeGreaterThan(sidebandReach(model).above(1e-4))
        expect(Math.log2(grid.paddedSamples) % 1).toBe(0)
        expect(grid.paddedSamples).toBeGreaterThanOrEqual(grid.samples)
        expect(grid.energyStepMeV).toBe(grid.spanMeV / grid.paddedSamples)
        expect(grid.halfBins % 2).toBe(0)
        expect(2 * grid.halfBins * grid.stride).toBeLessThanOrEqual(grid.paddedSamples)
        expect(grid.reason).toContain(`${Number(grid.timeStepPs.toPrecision(3))} ps`)
        expect(grid.warnings).toEqual([])
      }
      const linear = gridOf(chooseLinearGrid(model))
      const homogeneous = model.zeroPhononFwhmMeV + thermalWidthMeV(model, model.temperatureK)
      expect(linear.energyStepMeV).toBeLessThan(Math.max(homogeneous, model.ensembleFwhmMeV) / 10)
      expect(2 * gridOf(chooseMapGrid(model, 0)).halfBins).toBeLessThanOrEqual(512)
    }
  })

  it('take a map’s window from the homogeneous decay, a line’s from the shorter of the two', () => {
    const [wide, narrow] = [10, 0].map((ensembleFwhmMeV) => lineModel({ zeroPhononFwhmMeV: 0.2, ensembleFwhmMeV }))
    const length = (grid: SpectralGrid) => grid.samples * grid.timeStepPs
    expect(length(gridOf(chooseLinearGrid(wide!)))).toBeLessThan(1.2)
    expect(length(gridOf(chooseLinearGrid(narrow!)))).toBeGreaterThan(90)
    // The echo decays as exp(-2 gam t).
    expect(length(gridOf(chooseMapGrid(wide!, 0)))).toBeGreaterThan(30)
  })

  // Every combination of widths: which of the two kinds of spectra exists, and which field is named.
  it.each([
    [
      'no width at all',
      lineModel({ zeroPhononFwhmMeV: 0 }),
      ['zeroPhononFwhmMeV', 'ensembleFwhmMeV'],
      ['zeroPhononFwhmMeV'],
    ],
    ['an ensemble only', lineModel({ zeroPhononFwhmMeV: 0, ensembleFwhmMeV: 2 }), null, ['zeroPhononFwhmMeV']],
    [
      'a bath with a zero-phonon line',
      lineModel({ zeroPhononFwhmMeV: 0, bath: [powerLaw()], temperatureK: 20 }),
      ['zeroPhononFwhmMeV', 'ensembleFwhmMeV'],
      ['zeroPhononFwhmMeV'],
    ],
    [
      'the same with an ensemble',
      lineModel({ zeroPhononFwhmMeV: 0, ensembleFwhmMeV: 2, bath: [powerLaw()], temperatureK: 20 }),
      null,
      ['zeroPhononFwhmMeV'],
    ],
    [
      'a thermal width only',
      lineModel({ zeroPhononFwhmMeV: 0, bath: [powerLaw({ exponent: 1 })], temperatureK: 20 }),
      null,
      null,
    ],
    [
      'the same at 0 K',
      lineModel({ zeroPhononFwhmMeV: 0, bath: [powerLaw({ exponent: 1 })], temperatureK: 0 }),
      ['zeroPhononFwhmMeV', 'ensembleFwhmMeV'],
      ['zeroPhononFwhmMeV'],
    ],
    [
      'modes only',
      lineModel({ zeroPhononFwhmMeV: 0, modes: [{ label: '', energyMeV: 4, huangRhys: 1 }] }),
      ['zeroPhononFwhmMeV', 'ensembleFwhmMeV'],
      ['zeroPhononFwhmMeV'],
    ],
    ['a homogeneous width', lineModel(), null, null],
  ] as const)('%s', (_, model, linearFields, mapFields) => {
    const fields = (result: GridResult) => (result.ok ? null : result.issues.map(({ path }) => path.join('.')))
    expect(fields(chooseLinearGrid(model))).toEqual(linearFields)
    expect(fields(chooseMapGrid(model, 0.5))).toEqual(mapFields)
    for (const result of [chooseLinearGrid(model), chooseMapGrid(model, 0.5)]) {
      if (!result.ok) expect(result.code).toBe('engine/invalid')
    }
  })

  it('refuse what passes the limits, naming the grid it needs', () => {
    const model = lineModel({ zeroPhononFwhmMeV: 1e-3, modes: [{ label: '', energyMeV: 26, huangRhys: 0.5 }] })
    const refusal = refusalOf(chooseMapGrid(model, 0))
    expect(refusal.code).toBe('run/grid-too-large')
    expect(refusal.issues[0]!.path).toEqual(['zeroPhononFwhmMeV'])
    const needed = Number(/needs (\d+) \(step/.exec(refusal.issues[0]!.message)![1])
    expect(needed).toBeGreaterThan(limits.mapSamples)
    expect(refusal.issues[0]!.message).toContain(`into ${limits.mapSamples} samples`)
    // A number of samples of one's own is accepted, with a warning.
    const own = gridOf(chooseMapGrid(model, 0, { mapSamples: 512 }))
    expect(own.samples).toBe(512)
    expect(own.warnings[0]).toContain('mapSamples')
    expect(refusalOf(chooseLinearGrid(lineModel({ zeroPhononFwhmMeV: 1e-5, modes: model.modes }))).code).toBe(
      'run/grid-too-large',
    )
  })

  it('take a step and a number of samples of one’s own', () => {
    const grid = gridOf(chooseLinearGrid(richModel(), { linearTimeStepPs: 0.05, linearSamples: 1000 }))
    expect([grid.timeStepPs, grid.samples]).toEqual([0.05, 1000])
    expect(grid.reason).toContain('set by hand')
    expect(grid.warnings).toHaveLength(1)
    expect(grid.warnings[0]).toContain('linearTimeStepPs')
  })

  it('are finite or refused with a reason, for any model', () => {
    fc.assert(
      fc.property(
        arbitraryPhonons,
        arbitraryTemperature,
        fc.constantFrom(0, 1e-4, 0.1, 30),
        fc.constantFrom(0, 0.01, 5, 200),
        (phonons, temperatureK, zeroPhononFwhmMeV, ensembleFwhmMeV) => {
          const model = lineModel({ ...phonons, temperatureK, zeroPhononFwhmMeV, ensembleFwhmMeV })
          for (const result of [chooseLinearGrid(model), chooseMapGrid(model, 0)]) {
            if (!result.ok) {
              expect(result.issues[0]!.message).not.toMatch(/NaN|Infinity/)
              continue
            }
            const { timeStepPs, samples, paddedSamples, energyStepMeV, viewMeV, halfBins } = result.grid
            for (const value of [timeStepPs, samples, paddedSamples, energyStepMeV, viewMeV, halfBins]) {
              expect(Number.isFinite(value) && value > 0).toBe(true)
            }
          }
        },
      ),
      { numRuns: 200 },
    )
  })
})
