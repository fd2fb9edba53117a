import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { ensembleSigma, homogeneousRate } from '../../shared/engine/coherence-decay'
import { HBAR_MEV_PS, PLANCK_MEV_PS } from '../../shared/engine/constants'
import { faddeeva } from '../../shared/engine/faddeeva'
import { chooseMapGrid } from '../../shared/engine/grid'
import { kernelAbsorptiveMap } from '../../shared/engine/kernel/absorptive-map'
import { kernelMap } from '../../shared/engine/kernel/complex-map'
import { loadKernel } from '../../shared/engine/kernel/load-kernel'
import { plainMap, type MapBins } from '../../shared/engine/map'
import { mapAt, mapSampledAt, type EnergyPair } from '../../shared/engine/map-at'
import { absorptiveMap, correctedMap, signalMap } from '../../shared/engine/map-kernel'
import type { MapTables } from '../../shared/engine/map-tables'
import { oracleSpectra } from '../../shared/engine/oracle'
import { signalRow } from '../../shared/engine/signal-row'
import { selfCheck } from '../../shared/engine/self-check'
import { binEnergies } from '../../shared/engine/stages'
import { thirdOrderPathways } from '../../shared/engine/third-order'
import type { ComplexSeries, LineModel } from '../../shared/engine/types'
import { Complex } from 'complex.js'
import { lineBroadeningAt } from '../../shared/engine/line-broadening'
import { largest, powerLaw } from './support'
import { lineModel, modelOf, referenceCases, richModel, tablesFor } from './support/line-model'

const kernel = loadKernel()!
const largestModulus = ({ re, im }: ComplexSeries) => largest(re.map((value, i) => Math.hypot(value, im[i]!)))
const difference = (a: ComplexSeries, b: ComplexSeries) =>
  largest(a.re.map((value, i) => Math.hypot(value - b.re[i]!, a.im[i]! - b.im[i]!)))

interface MapReference {
  rephasing: { real: number[]; imag: number[] }
  nonRephasing: { real: number[]; imag: number[] }
  rephasingMaximum: { modulusPs2: number }
}

/** Largest error of any part, in units of the modulus at the rephasing maximum. */
const errorOf = (found: { rephasing: ComplexSeries; nonRephasing: ComplexSeries }, expected: MapReference): number => {
  const scale = expected.rephasingMaximum.modulusPs2
  return largest(
    (['rephasing', 'nonRephasing'] as const).flatMap((key) =>
      expected[key].real.map((value, i) =>
        Math.hypot(value - found[key].re[i]! / scale, expected[key].imag[i]! - found[key].im[i]! / scale),
      ),
    ),
  )
}

describe('two-dimensional spectra at given energies', () => {
  it.each(referenceCases('twoDimensionalSpectra'))('equal the reference %s', (_, { parameters, samples, values }) => {
    const { waitingTimePs } = parameters as { waitingTimePs: number }
    const found = mapAt(modelOf(parameters), waitingTimePs, samples!.points as unknown as EnergyPair[], 1e-6)
    expect(errorOf(found, values as unknown as MapReference)).toBeLessThan(2e-7)
  })

  it.each(referenceCases('twoDimensionalSpectraSampled'))('equal the sampled reference %s', (_, entry) => {
    const { waitingTimePs, samples, timeStepPs } = entry.parameters as unknown as Record<string, number>
    const bin = PLANCK_MEV_PS / (samples! * timeStepPs!)
    const points = (entry.samples!.points as unknown as EnergyPair[]).map(([m1, m3]): EnergyPair => [
      2000 + m1 * bin,
      2000 + m3 * bin,
    ])
    const found = mapSampledAt(modelOf(entry.parameters), waitingTimePs!, timeStepPs!, samples!, points)
    expect(errorOf(found, entry.values as unknown as MapReference)).toBeLessThan(1e-12)
  })
})

/** Grids with and without padding, of odd lengths, with a stride. */
const layouts: [string, number, MapBins][] = [
  ['64 samples, all bins', 64, { padded: 64, halfBins: 32, stride: 1 }],
  ['50 samples padded to 128, every third bin', 50, { padded: 128, halfBins: 20, stride: 3 }],
  ['33 samples padded to 256', 33, { padded: 256, halfBins: 6, stride: 1 }],
  ['100 samples padded to 128', 100, { padded: 128, halfBins: 64, stride: 1 }],
]
const models: [string, LineModel][] = [
  ['with an ensemble', richModel({ populationLifetimePs: 4 })],
  ['without an ensemble', richModel({ ensembleFwhmMeV: 0, temperatureK: 60 })],
]

describe('map kernels', () => {
  it('has the compiled kernel here', () => {
    expect(kernel).not.toBeNull()
  })

  it.each(
    layouts.flatMap(([layout, n, bins]) => models.map(([name, model]) => [layout, name, n, bins, model] as const)),
  )('agree: %s, %s', (_, __, n, bins, model) => {
    const tables = tablesFor(model, 0.37, 0.05, n)
    const plain = { rephasing: plainMap(tables.rephasing, bins), nonRephasing: plainMap(tables.nonRephasing, bins) }
    const scale = largestModulus(plain.rephasing)
    expect(difference(kernelMap(kernel, tables.rephasing, bins), plain.rephasing)).toBeLessThan(1e-14 * scale)
    expect(difference(kernelMap(kernel, tables.nonRephasing, bins), plain.nonRephasing)).toBeLessThan(1e-14 * scale)
    const absorptive = plain.rephasing.re.map((value, i) => value + plain.nonRephasing.re[i]!)
    const found = kernelAbsorptiveMap(kernel, tables, bins)
    expect(largest(found.map((value, i) => Math.abs(value - absorptive[i]!)))).toBeLessThan(1e-14 * scale)
  })

  it('equal the plain double sum of the pathways', () => {
    const model = richModel({ populationLifetimePs: 9 })
    const [n, stepPs, wait] = [20, 0.06, 0.5]
    const points = [
      [0, 0],
      [3, -2],
      [-5, 6],
    ] as const
    const bins = { padded: 32, halfBins: 16, stride: 1 }
    const tables = tablesFor(model, wait, stepPs, n)
    const unit = (2 * Math.PI) / (32 * stepPs)
    const broadening = (time: number) => {
      const { re, im } = lineBroadeningAt(model, model.temperatureK, Float64Array.of(time))
      return new Complex(re[0]!, im[0]!)
    }
    const expected = oracleSpectra(
      model,
      broadening,
      { stepPs, samples: n, waitingTimePs: wait },
      points.map(([m1, m3]) => ({ w1: m1 * unit, w3: m3 * unit })),
    )
    const maps = { rephasing: signalMap(tables.rephasing, bins), nonRephasing: signalMap(tables.nonRephasing, bins) }
    const scale = largestModulus(maps.rephasing)
    points.forEach(([m1, m3], i) => {
      for (const key of ['rephasing', 'nonRephasing'] as const) {
        const place = (m1 + 16) * 32 + m3 + 16
        const error = expected[i]![key].sub(maps[key].re[place]!, maps[key].im[place]!).abs()
        expect(error).toBeLessThan(1e-13 * scale)
      }
    })
  })

  it('fall back to sums of logarithms where the factors would overflow', () => {
    // Re g of a hot, strongly coupled bath passes 300 within the window.
    const model = lineModel({ bath: [powerLaw({ couplingStrength: 60 })], temperatureK: 300, ensembleFwhmMeV: 1 })
    const tables = tablesFor(model, 0.2, 0.02, 100)
    expect(tables.rephasing.factors).toBeUndefined()
    const bins = { padded: 128, halfBins: 64, stride: 1 }
    const map = signalMap(tables.rephasing, bins)
    const { rephasing } = mapSampledAt(model, 0.2, 0.02, 100, [[2000, 2000]])
    expect(largestModulus(map)).toBeGreaterThan(0)
    expect(Math.abs(map.re[64 * 128 + 64]! - rephasing.re[0]!)).toBeLessThan(1e-13 * largestModulus(map))
    // dt^2 (R2 + R3) at t1 = 0.04, t3 = 0.06 ps.
    const row = { re: new Float64Array(100), im: new Float64Array(100) }
    signalRow(tables.rephasing, 2, row)
    const { r2, r3 } = thirdOrderPathways(model, [[0.04, 0.2, 0.06]])
    expect(Math.abs(row.re[3]! / 0.02 ** 2 - r2.re[0]! - r3.re[0]!)).toBeLessThan(1e-13)
    expect(Math.abs(row.im[3]! / 0.02 ** 2 - r2.im[0]! - r3.im[0]!)).toBeLessThan(1e-13)
  })

  it('refuse a grid that does not fit', () => {
    const tables = tablesFor(lineModel(), 0, 0.1, 20)
    expect(() => kernelMap(kernel, tables.rephasing, { padded: 16, halfBins: 4, stride: 1 })).toThrow('found 16')
    expect(() => kernelMap(kernel, tables.rephasing, { padded: 32, halfBins: 3, stride: 1 })).toThrow('and 3')
  })

  it('stop when told', () => {
    const tables = tablesFor(lineModel(), 0, 0.1, 64)
    const bins = { padded: 64, halfBins: 32, stride: 1 }
    const asked = { times: 0 }
    const stop = () => ++asked.times > 0
    for (const map of [kernelMap(kernel, tables.rephasing, bins, stop), plainMap(tables.rephasing, bins, stop)]) {
      expect(largestModulus(map)).toBe(0)
    }
    expect(asked.times).toBe(2)
  })

  it('give the same bits twice, and whatever ran before', () => {
    const small = tablesFor(richModel(), 0, 0.05, 40)
    const large = tablesFor(richModel({ temperatureK: 77 }), 1, 0.03, 200)
    const [a, b] = [
      { padded: 64, halfBins: 20, stride: 1 },
      { padded: 512, halfBins: 100, stride: 2 },
    ]
    const before = [kernelMap(kernel, small.rephasing, a), kernelAbsorptiveMap(kernel, small, a)] as const
    kernelMap(kernel, large.nonRephasing, b)
    kernelAbsorptiveMap(kernel, large, b)
    expect(kernelMap(kernel, small.rephasing, a)).toEqual(before[0])
    expect(kernelAbsorptiveMap(kernel, small, a)).toEqual(before[1])
  })

  it('agree with the oracle for any model', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 2, noNaN: true }),
        fc.double({ min: 0.2, max: 6, noNaN: true }),
        fc.double({ min: 0, max: 300, noNaN: true }),
        fc.double({ min: 0, max: 20, noNaN: true }),
        fc.constantFrom(0, 0.31, 5),
        (couplingStrength, exponent, temperatureK, ensembleFwhmMeV, wait) => {
          const model = lineModel({
            bath: [powerLaw({ couplingStrength, exponent })],
            modes: [{ label: '', energyMeV: 7, huangRhys: 0.3 }],
            temperatureK,
            ensembleFwhmMeV,
          })
          const choice = chooseMapGrid(model, wait)
          if (choice.ok) expect(selfCheck(model, choice.grid, wait)).toBeLessThan(1e-12)
        },
      ),
      { numRuns: 25 },
    )
  })
})

// w(z) is the Faddeeva function; Siemens et al., Opt. Express 18, 17699 (2010), integrated in both times.
const exactMaps = (model: LineModel, e1: number, e3: number) => {
  const [gam, sig] = [homogeneousRate(model), ensembleSigma(model)]
  const out = new Float64Array(2)
  const w = (d: number): [number, number] => {
    faddeeva(d / (Math.SQRT2 * sig), gam / (Math.SQRT2 * sig), out)
    return [out[0]!, out[1]!]
  }
  const [d1, d3] = [(e1 - 2000) / HBAR_MEV_PS, (e3 - 2000) / HBAR_MEV_PS]
  const factor = (2 * Math.sqrt(Math.PI / 2)) / sig
  const [a, b, c] = [w(d3), w(-d1), w(d1)]
  const x = d3 - d1
  const size = 4 * gam * gam + x * x
  const [sr, si] = [a[0] + b[0], a[1] + b[1]]
  const rephasing = [(factor * (sr * 2 * gam - si * x)) / size, (factor * (si * 2 * gam + sr * x)) / size] as const
  const nonRephasing = [(factor * (a[1] - c[1])) / x, (-factor * (a[0] - c[0])) / x] as const
  return { rephasing, nonRephasing }
}

describe('maps of pure dephasing with an ensemble', () => {
  const model = lineModel({ zeroPhononFwhmMeV: 0.6, ensembleFwhmMeV: 1.5 })

  it('equal the closed form on the engine’s own grid', () => {
    const choice = chooseMapGrid(model, 0)
    if (!choice.ok) throw new Error(choice.issues[0]!.message)
    const { grid } = choice
    const bins = { padded: grid.paddedSamples, halfBins: grid.halfBins, stride: grid.stride }
    const tables = tablesFor(model, 0, grid.timeStepPs, grid.samples)
    const maps = {
      rephasing: correctedMap(tables.rephasing, bins),
      nonRephasing: correctedMap(tables.nonRephasing, bins),
    }
    const energies = binEnergies(bins, grid.spanMeV).map((offset) => 2000 + offset)
    const scale = largestModulus(maps.rephasing)
    const side = energies.length
    const errors: number[] = []
    for (let i = 0; i < side; i += 5) {
      for (let k = 1; k < side; k += 7) {
        if (i === k) continue
        const exact = exactMaps(model, energies[i]!, energies[k]!)
        for (const key of ['rephasing', 'nonRephasing'] as const) {
          const place = i * side + k
          errors.push(Math.hypot(maps[key].re[place]! - exact[key][0], maps[key].im[place]! - exact[key][1]) / scale)
        }
      }
    }
    // The window leaves 3e-5 of the signal by its rule.
    expect(largest(errors)).toBeLessThan(3e-5)
  })

  it('equal it closely at given energies', () => {
    const points: EnergyPair[] = [
      [2000.3, 2000.1],
      [1999.2, 2000.8],
      [2001, 1999.4],
    ]
    const found = mapAt(model, 0.9, points, 1e-8)
    points.forEach(([e1, e3], i) => {
      const exact = exactMaps(model, e1, e3)
      for (const key of ['rephasing', 'nonRephasing'] as const) {
        expect(Math.hypot(found[key].re[i]! - exact[key][0], found[key].im[i]! - exact[key][1])).toBeLessThan(2e-8)
      }
    })
  })
})

describe('symmetries of maps', () => {
  it('have no dependence on the waiting time without phonons, population decay apart', () => {
    const model = lineModel({ ensembleFwhmMeV: 2, populationLifetimePs: 3 })
    const bins = { padded: 128, halfBins: 64, stride: 1 }
    const early = signalMap(tablesFor(model, 0, 0.1, 100).rephasing, bins)
    const late = signalMap(tablesFor(model, 6, 0.1, 100).rephasing, bins)
    const decay = Math.exp(-2)
    const scaled = { re: early.re.map((v) => v * decay), im: early.im.map((v) => v * decay) }
    expect(difference(late, scaled)).toBeLessThan(1e-14 * largestModulus(early))
  })

  // Sum over all bins of E1 = value at t1 = 0, half of it by the weight of the first sample: exact on the grid.
  it('obey the projection-slice theorem on the grid', () => {
    const model = richModel()
    const [n, padded, stepPs, wait] = [128, 128, 0.04, 0.8]
    const tables: MapTables = tablesFor(model, wait, stepPs, n)
    const bins = { padded, halfBins: padded / 2, stride: 1 }
    const map = absorptiveMap(tables, bins)
    const times = Array.from({ length: n }, (_, k) => [0, wait, k * stepPs] as const)
    const { r1, r2, r3, r4 } = thirdOrderPathways(model, times)
    const re = r1.re.map((v, k) => v + r2.re[k]! + r3.re[k]! + r4.re[k]!)
    const im = r1.im.map((v, k) => v + r2.im[k]! + r3.im[k]! + r4.im[k]!)
    const scale = largest(map.map(Math.abs)) * padded
    for (let k = 0; k < padded; k += 9) {
      let projection = 0
      for (let i = 0; i < padded; i++) projection += map[i * padded + k]!
      const w = (2 * Math.PI * (k - padded / 2)) / padded
      let expected = 0
      for (let j = 0; j < n; j++) {
        expected += (j === 0 ? 0.5 : 1) * (re[j]! * Math.cos(w * j) - im[j]! * Math.sin(w * j))
      }
      // dt^2/2 a sample, `padded` bins.
      expect(Math.abs(projection - (expected * padded * stepPs ** 2) / 2)).toBeLessThan(1e-12 * scale)
    }
  })

  it('project onto the continuous theorem: Int dE1 absorptive = pi hbar Re Int dt3 e^{iE3t3/hbar} (R + NR)(0, t2, t3)', () => {
    const model = lineModel({ bath: [powerLaw()], temperatureK: 20, zeroPhononFwhmMeV: 1, ensembleFwhmMeV: 2 })
    const [stepPs, n, padded, wait] = [0.01, 2048, 2048, 0.4]
    const bins = { padded, halfBins: 256, stride: 4 }
    const tables = tablesFor(model, wait, stepPs, n)
    const map = absorptiveMap(tables, { ...bins, halfBins: padded / 2, stride: 1 })
    const step = PLANCK_MEV_PS / (padded * stepPs)
    const times = Array.from({ length: n }, (_, k) => [0, wait, k * stepPs] as const)
    const { r1, r2, r3, r4 } = thirdOrderPathways(model, times)
    const sum = (parts: ComplexSeries[]) => (k: number) =>
      parts.reduce<[number, number]>(([a, b], { re, im }) => [a + re[k]!, b + im[k]!], [0, 0])
    const at = sum([r1, r2, r3, r4])
    const expected = (offset: number) => {
      const w = offset / HBAR_MEV_PS
      let total = 0
      for (let j = 0; j < n; j++) {
        const [a, b] = at(j)
        total += (j === 0 ? 0.5 : 1) * stepPs * (a * Math.cos(w * j * stepPs) - b * Math.sin(w * j * stepPs))
      }
      return Math.PI * HBAR_MEV_PS * total
    }
    const peak = expected(0)
    for (const m of [-40, -8, 0, 5, 30]) {
      let projection = 0
      for (let i = 0; i < padded; i++) projection += map[i * padded + m + padded / 2]! * step
      expect(Math.abs(projection - expected(m * step)) / peak).toBeLessThan(1e-6)
    }
  })

  it('converge with the square of the step, and with its fourth power once the ends are corrected', () => {
    const model = lineModel({ bath: [powerLaw({ couplingStrength: 0.3 })], temperatureK: 10, zeroPhononFwhmMeV: 1 })
    const window = 24
    const bins = (padded: number) => ({ padded, halfBins: 24, stride: 1 })
    const mapOf = (samples: number, corrected: boolean) => {
      const { rephasing } = tablesFor(model, 0.5, window / samples, samples)
      return corrected ? correctedMap(rephasing, bins(samples)) : signalMap(rephasing, bins(samples))
    }
    const exact = mapOf(4096, true)
    const errors = (corrected: boolean) => [512, 1024].map((n) => difference(mapOf(n, corrected), exact))
    const [coarse, fine] = errors(false) as [number, number]
    const [correctedCoarse, correctedFine] = errors(true) as [number, number]
    expect(coarse / fine).toBeGreaterThan(3.7)
    expect(coarse / fine).toBeLessThan(4.3)
    expect(correctedCoarse / correctedFine).toBeGreaterThan(12)
    expect(correctedCoarse).toBeLessThan(coarse / 30)
  })
})
