import { describe, expect, it } from 'vitest'
import { zeroPhononWeight, moments } from '../../shared/engine/bath-integrals'
import { BOLTZMANN_MEV_PER_K, GAUSSIAN_FWHM_PER_SIGMA, HBAR_MEV_PS } from '../../shared/engine/constants'
import { faddeeva } from '../../shared/engine/faddeeva'
import { chooseLinearGrid, type SpectralGrid } from '../../shared/engine/grid'
import { huangRhysLineWeights } from '../../shared/engine/huang-rhys'
import { lineBroadening } from '../../shared/engine/line-broadening'
import { linearSampled, linearSignal, realSpectrum } from '../../shared/engine/linear'
import { absorptionAt, absorptionFwhm, emissionAt } from '../../shared/engine/linear-at'
import { isMissing, peakOf, widthOf } from '../../shared/engine/measured'
import { linearOnGrid } from '../../shared/engine/stages'
import type { LineModel } from '../../shared/engine/types'
import { largest, powerLaw, relativeError } from './support'
import { lineModel, modelOf, referenceCases, richModel } from './support/line-model'

const gridOf = (model: LineModel): SpectralGrid => {
  const choice = chooseLinearGrid(model)
  if (!choice.ok) throw new Error(choice.issues[0]!.message)
  return choice.grid
}

const every = (values: Float64Array, step: number) => values.filter((_, i) => i % step === 0)

const gaussianOf = (model: LineModel) => model.ensembleFwhmMeV / GAUSSIAN_FWHM_PER_SIGMA

/** Voigt profile of area 1 by the Faddeeva function (Abramowitz & Stegun 7.1.4 and 7.4.13). */
const voigt = (offset: number, model: LineModel): number => {
  const sigma = gaussianOf(model)
  const out = new Float64Array(2)
  faddeeva(Math.abs(offset) / (sigma * Math.SQRT2), model.zeroPhononFwhmMeV / 2 / (sigma * Math.SQRT2), out)
  return out[0]! / (sigma * Math.sqrt(2 * Math.PI))
}

describe('absorption at given energies', () => {
  it.each(referenceCases('absorption'))('equals the reference %s', (_, { parameters, samples, values }) => {
    const { absorption, peak } = values as unknown as { absorption: number[]; peak: number }
    const found = absorptionAt(modelOf(parameters), Float64Array.from(samples!.points as number[]))
    // The reference states 1e-6 of the peak; its own digits allow more.
    expect(largest(absorption.map((value, i) => Math.abs(found[i]! - value) / peak))).toBeLessThan(1e-10)
  })

  it.each(referenceCases('fluorescence'))(
    'equals the emission of the reference %s',
    (_, { parameters, samples, values }) => {
      const { fluorescence, peak } = values as unknown as { fluorescence: number[]; peak: number }
      const found = emissionAt(modelOf(parameters), Float64Array.from(samples!.points as number[]))
      expect(largest(fluorescence.map((value, i) => Math.abs(found[i]! - value) / peak))).toBeLessThan(1e-10)
    },
  )

  it.each(referenceCases('absorptionFwhm'))('gives the width of the reference %s', (_, { parameters, values }) => {
    const expected = values as unknown as { fwhmMeV: number; leftMeV: number; rightMeV: number; peakPerMeV: number }
    const found = absorptionFwhm(modelOf(parameters))
    expect(relativeError(found.fwhmMeV, expected.fwhmMeV)).toBeLessThan(1e-9)
    expect(Math.abs(found.leftMeV - expected.leftMeV)).toBeLessThan(1e-9)
    expect(Math.abs(found.rightMeV - expected.rightMeV)).toBeLessThan(1e-9)
    expect(relativeError(found.peakPerMeV, expected.peakPerMeV)).toBeLessThan(1e-9)
  })

  it('has the Voigt widths of the reference', () => {
    const [[, { values }]] = referenceCases('voigtFwhm') as unknown as [[string, { values: unknown }]]
    const { rows } = values as { rows: { lorentzianFwhmMeV: number; gaussianFwhmMeV: number; fwhmMeV: number }[] }
    for (const { lorentzianFwhmMeV, gaussianFwhmMeV, fwhmMeV } of rows) {
      const model = lineModel({ zeroPhononFwhmMeV: lorentzianFwhmMeV, ensembleFwhmMeV: gaussianFwhmMeV })
      expect(relativeError(absorptionFwhm(model).fwhmMeV, fwhmMeV)).toBeLessThan(1e-8)
    }
  })

  it('has the Lorentzian width 2 hbar/T2 of the reference', () => {
    const [[, { parameters, values }]] = referenceCases('lorentzianFwhm') as unknown as [
      [string, { parameters: unknown; values: unknown }],
    ]
    const { coherenceTimesPs } = parameters as { coherenceTimesPs: number[] }
    const { fwhmMeV } = values as { fwhmMeV: number[] }
    coherenceTimesPs.forEach((time, i) => {
      const zeroPhononFwhmMeV = (2 * HBAR_MEV_PS) / time
      expect(relativeError(zeroPhononFwhmMeV, fwhmMeV[i]!)).toBeLessThan(1e-12)
      expect(relativeError(absorptionFwhm(lineModel({ zeroPhononFwhmMeV })).fwhmMeV, fwhmMeV[i]!)).toBeLessThan(1e-9)
    })
  })

  it('mirrors emission about E0', () => {
    const model = richModel({ temperatureK: 30 })
    const offsets = Float64Array.of(-7, -0.4, 0, 0.2, 5, 26)
    const up = absorptionAt(
      model,
      offsets.map((x) => 2000 + x),
    )
    const down = emissionAt(
      model,
      offsets.map((x) => 2000 - x),
    )
    expect(largest(up.map((value, i) => Math.abs(value - down[i]!)))).toBeLessThan(1e-13)
  })
})

describe('spectra on their own grid', () => {
  const models: [string, LineModel][] = [
    ['a bare Lorentzian', lineModel()],
    ['a bare Gaussian', lineModel({ zeroPhononFwhmMeV: 0, ensembleFwhmMeV: 4 })],
    ['two baths, three modes and an ensemble', richModel()],
    ['the same warm', richModel({ temperatureK: 150 })],
    ['an acoustic sideband', lineModel({ bath: [powerLaw()], zeroPhononFwhmMeV: 0.1 })],
    ['an exponential cutoff', lineModel({ bath: [powerLaw({ cutoffShape: 'exponential' })], temperatureK: 40 })],
    [
      'a thermal centre',
      lineModel({ bath: [powerLaw({ exponent: 1, couplingStrength: 0.05 })], temperatureK: 77, zeroPhononFwhmMeV: 0 }),
    ],
    [
      'strong coupling at 300 K',
      lineModel({ bath: [powerLaw({ couplingStrength: 8 })], temperatureK: 300, zeroPhononFwhmMeV: 1 }),
    ],
  ]

  it.each(models)('equal direct integration: %s', (_, model) => {
    const { spectra } = linearOnGrid(model, gridOf(model))
    const energies = every(spectra.energiesMeV, 31)
    const peak = largest(spectra.absorption)
    const [up, down] = [absorptionAt(model, energies), emissionAt(model, energies)]
    expect(largest(every(spectra.absorption, 31).map((value, i) => Math.abs(value - up[i]!)))).toBeLessThan(5e-9 * peak)
    expect(largest(every(spectra.emission, 31).map((value, i) => Math.abs(value - down[i]!)))).toBeLessThan(5e-9 * peak)
  })

  it('is the Voigt profile without phonons', () => {
    const model = lineModel({ ensembleFwhmMeV: 1.7 })
    const { spectra } = linearOnGrid(model, gridOf(model))
    const error = spectra.absorption.map((value, i) => Math.abs(value - voigt(spectra.energiesMeV[i]! - 2000, model)))
    expect(largest(error)).toBeLessThan(5e-9 * voigt(0, model))
  })

  it('is a Franck-Condon progression of Voigt profiles for one mode', () => {
    const mode = { label: '', energyMeV: 26, huangRhys: 1 }
    const model = lineModel({ modes: [mode], temperatureK: 300, ensembleFwhmMeV: 2 })
    const orders = Array.from({ length: 41 }, (_, k) => k - 15)
    const weights = huangRhysLineWeights(mode, 300, orders)
    const { spectra } = linearOnGrid(model, gridOf(model))
    const expected = spectra.energiesMeV.map((energy) =>
      orders.reduce((sum, m, k) => sum + weights[k]! * voigt(energy - 2000 - 26 * m, model), 0),
    )
    expect(largest(expected.map((value, i) => Math.abs(value - spectra.absorption[i]!)))).toBeLessThan(
      5e-9 * largest(expected),
    )
  })

  // e^{-S} [delta + sum_n S^n/n! Gamma pdf of shape n (p-1), scale hbar w_c], S = a Gamma(p-1): for p = 3 the shape is 2n.
  it('is the exact Poisson sum of Gamma densities at 0 K for an exponential cutoff', () => {
    const [coupling, cutoff, width] = [0.6, 1.5, 0.4]
    const model = lineModel({
      temperatureK: 0,
      zeroPhononFwhmMeV: width,
      bath: [powerLaw({ couplingStrength: coupling, cutoffEnergyMeV: cutoff, cutoffShape: 'exponential' })],
    })
    // The Lorentzian of half width h at complex distance z = (x + i h)/w_c: Re (i/pi w_c) Int density(u)/(z - u) du, summed
    // over a fine trapezoid in u; independent of any time-domain form.
    const half = width / 2
    const lorentzian = (x: number) => half / Math.PI / (x * x + half * half)
    const density = (u: number): number => {
      let sum = 0
      let term = Math.exp(-coupling - u) * u * coupling
      for (let n = 1; n < 40; n++) {
        sum += term
        term *= (coupling * u * u) / ((n + 1) * 2 * n * (2 * n + 1))
      }
      return sum
    }
    const step = 1e-3
    const expected = (x: number): number => {
      let sum = 0
      for (let u = step; u < 60; u += step) sum += density(u) * lorentzian(x - u * cutoff)
      return Math.exp(-coupling) * lorentzian(x) + sum * step
    }
    const offsets = [-2, -0.3, 0, 0.5, 3, 9]
    const found = absorptionAt(
      model,
      Float64Array.from(offsets, (x) => 2000 + x),
    )
    expect(largest(offsets.map((x, i) => Math.abs(found[i]! - expected(x))))).toBeLessThan(1e-6 * lorentzian(0))
  })

  it('obeys detailed balance without homogeneous and ensemble width', () => {
    const temperatureK = 60
    // p = 1 at finite temperature has a continuous spectrum of its own.
    const model = lineModel({
      temperatureK,
      zeroPhononFwhmMeV: 0,
      bath: [powerLaw({ exponent: 1, couplingStrength: 0.3 })],
    })
    const offsets = Float64Array.of(-9, -4, -1, 0, 2, 5)
    const energies = offsets.map((x) => 2000 + x)
    const [up, down] = [absorptionAt(model, energies), emissionAt(model, energies)]
    offsets.forEach((x, i) => {
      const ratio = down[i]! / up[i]! / Math.exp(-x / (BOLTZMANN_MEV_PER_K * temperatureK))
      expect(Math.abs(ratio - 1)).toBeLessThan(1e-7)
    })
  })

  it('has area 1 and the moments of the closed forms', () => {
    // An ensemble in place of a homogeneous width: all moments exist.
    const model = richModel({ zeroPhononFwhmMeV: 0, temperatureK: 20 })
    const energies = Float64Array.from({ length: 8001 }, (_, i) => 1900 + i * 0.05)
    const values = absorptionAt(model, energies)
    const sum = (of: (x: number) => number) =>
      values.reduce((total, v, i) => total + v * of(energies[i]! - 2000), 0) * 0.05
    const closed = moments(model, 20, model.ensembleFwhmMeV)
    const mean = sum((x) => x)
    expect(Math.abs(sum(() => 1) - 1)).toBeLessThan(1e-8)
    expect(relativeError(mean, closed.firstMomentAbsorptionMeV)).toBeLessThan(1e-7)
    expect(
      relativeError(
        sum((x) => (x - mean) ** 2),
        closed.varianceMeV2!,
      ),
    ).toBeLessThan(1e-6)
    expect(
      relativeError(
        sum((x) => (x - mean) ** 3),
        closed.thirdCentralMomentAbsorptionMeV3!,
      ),
    ).toBeLessThan(1e-5)
  })

  it('has a zero-phonon line of the closed weight', () => {
    const model = lineModel({ bath: [powerLaw()], zeroPhononFwhmMeV: 1e-3, temperatureK: 10 })
    const weight = zeroPhononWeight(model, 10).weight!
    const [peak] = absorptionAt(model, Float64Array.of(2000))
    // The sideband adds its own height beneath the line: 1e-3 of it at this width.
    expect(Math.abs(peak! / ((2 * weight) / (Math.PI * 1e-3)) - 1)).toBeLessThan(1e-3)
  })

  it('gives widths that interpolation does not snap to the grid', () => {
    const model = richModel({ temperatureK: 40 })
    const { spectra } = linearOnGrid(model, gridOf(model))
    const curve = { energiesMeV: spectra.energiesMeV, values: spectra.absorption }
    const peak = peakOf(curve)
    const width = isMissing(peak) ? peak : widthOf(curve, peak)
    if (isMissing(width)) throw new Error(width.reason)
    expect(relativeError(width.fwhmMeV, absorptionFwhm(model).fwhmMeV)).toBeLessThan(1e-5)
  })
})

describe('sampled sums', () => {
  const model = richModel({ temperatureK: 33 })
  const [stepPs, n] = [0.02, 512]
  const broadening = lineBroadening(model, 33, { stepPs, samples: n })

  it.each(referenceCases('linearSampled'))('equal the reference %s', (_, { parameters, samples: asked, values }) => {
    const given = parameters as unknown as { samples: number; timeStepPs: number }
    const reference = values as unknown as {
      absorption: number[]
      fluorescence: number[]
      absorptionPeakOnGrid: number
    }
    const own = modelOf(parameters)
    const g0 = lineBroadening(own, own.temperatureK, { stepPs: given.timeStepPs, samples: given.samples })
    const found = linearSampled(own, given.timeStepPs, g0, asked!.points as number[])
    const peak = reference.absorptionPeakOnGrid
    expect(largest(reference.absorption.map((v, i) => Math.abs(v - found.absorption[i]!)))).toBeLessThan(1e-11 * peak)
    expect(largest(reference.fluorescence.map((v, i) => Math.abs(v - found.emission[i]!)))).toBeLessThan(1e-11 * peak)
  })

  it('are the plain trapezoid at every bin', () => {
    const signal = linearSignal(model, broadening, stepPs)
    const scale = stepPs / (Math.PI * HBAR_MEV_PS)
    const fast = realSpectrum(signal, n)
    const bins = [0, 1, 7, 100, 255, 256, 300, 511]
    const { absorption, emission } = linearSampled(model, stepPs, broadening, bins)
    const peak = largest(fast) * scale
    bins.forEach((bin, i) => {
      let sum = signal.re[0]! / 2
      for (let j = 1; j < n; j++) {
        const angle = (2 * Math.PI * bin * j) / n
        sum += signal.re[j]! * Math.cos(angle) - signal.im[j]! * Math.sin(angle)
      }
      expect(Math.abs(absorption[i]! - scale * sum)).toBeLessThan(1e-13 * peak)
      expect(Math.abs(scale * fast[bin]! - scale * sum)).toBeLessThan(1e-13 * peak)
      expect(Math.abs(emission[i]! - scale * fast[(n - bin) % n]!)).toBeLessThan(1e-13 * peak)
    })
  })

  it('approach the continuous spectrum with the square of the step, by the known constant', () => {
    const bare = lineModel({ zeroPhononFwhmMeV: 0.5 })
    const gam = 0.25 / HBAR_MEV_PS
    const errorAt = (step: number): number => {
      const samples = Math.round(80 / step)
      const g0 = lineBroadening(bare, 4, { stepPs: step, samples })
      return linearSampled(bare, step, g0, [0]).absorption[0]! - 1 / (Math.PI * 0.25)
    }
    const [coarse, fine] = [errorAt(0.08), errorAt(0.04)]
    expect(coarse / fine).toBeCloseTo(4, 3)
    expect(relativeError(fine, (gam * 0.04 ** 2) / (12 * Math.PI * HBAR_MEV_PS))).toBeLessThan(1e-3)
  })

  it('follow the bins of a transform, with and without padding', () => {
    const signal = linearSignal(model, broadening, stepPs)
    const padded = realSpectrum(signal, 4 * n)
    const plain = realSpectrum(signal, n)
    expect(largest(plain.map((value, m) => Math.abs(value - padded[4 * m]!)))).toBeLessThan(1e-11)
  })
})
