import { describe, expect, it } from 'vitest'
import { centreLineSlope, ellipticity } from '../../shared/engine/map-measured'
import {
  curveQuantities,
  isMissing,
  momentsOf,
  peakOf,
  quantityOf,
  widthOf,
  type Curve,
} from '../../shared/engine/measured'
import { modelQuantities, stokesShifts } from '../../shared/engine/model-quantities'
import { signalMap } from '../../shared/engine/map-kernel'
import { binEnergies } from '../../shared/engine/stages'
import { powerLaw } from './support'
import { lineModel, tablesFor } from './support/line-model'

const curveOf = (energies: number[], f: (x: number) => number): Curve => ({
  energiesMeV: Float64Array.from(energies),
  values: Float64Array.from(energies, f),
})
const axis = (from: number, to: number, step: number) =>
  Array.from({ length: Math.round((to - from) / step) + 1 }, (_, i) => from + i * step)
const found = <T extends object>(value: T | { reason: string }): T => {
  if (isMissing(value)) throw new Error(value.reason)
  return value as T
}

const gaussian = (centre: number, sigma: number) => (x: number) => Math.exp(-((x - centre) ** 2) / (2 * sigma * sigma))
const FWHM = 2 * Math.sqrt(2 * Math.LN2)

describe('peak and width', () => {
  it.each([0, 0.013, 0.041, 0.077])('do not snap to the grid: centre off by %d', (shift) => {
    const curve = curveOf(axis(1990, 2010, 0.1), gaussian(2000 + shift, 1))
    const peak = found(peakOf(curve))
    expect(Math.abs(peak.energyMeV - 2000 - shift)).toBeLessThan(2e-4)
    expect(Math.abs(peak.value - 1)).toBeLessThan(1e-5)
    const width = found(widthOf(curve, peak))
    expect(Math.abs(width.fwhmMeV - FWHM)).toBeLessThan(3e-5)
    expect(Math.abs((width.leftMeV + width.rightMeV) / 2 - 2000 - shift)).toBeLessThan(2e-4)
  })

  it('take uneven axes', () => {
    const energies = axis(-3, 3, 0.02).map((u) => 2000 + Math.sinh(u))
    const curve = curveOf(energies, gaussian(2000.3, 1.2))
    expect(found(widthOf(curve, found(peakOf(curve)))).fwhmMeV).toBeCloseTo(FWHM * 1.2, 4)
  })

  it('stop at the first half-maximum crossing from the global maximum', () => {
    // A tall line beside a broad one that rises above half again.
    const curve = curveOf(axis(0, 60, 0.05), (x) => gaussian(20, 1)(x) + 0.7 * gaussian(30, 2)(x))
    const width = found(widthOf(curve, found(peakOf(curve))))
    expect(width.fwhmMeV).toBeLessThan(2.5)
    expect(width.rightMeV).toBeLessThan(22)
  })

  it('say why there is none', () => {
    const rising = curveOf(axis(0, 10, 1), (x) => x)
    expect(peakOf(rising)).toEqual({ reason: 'the largest value is at the end of the range' })
    expect(peakOf(curveOf(axis(0, 10, 1), () => -1))).toEqual({ reason: 'no positive value' })
    expect(peakOf(curveOf([1, 2], () => 1))).toEqual({ reason: 'fewer than three points' })
    const pedestal = curveOf(axis(0, 20, 0.5), (x) => 1 + gaussian(10, 1)(x) * 0.2)
    const missing = widthOf(pedestal, found(peakOf(pedestal)))
    expect(isMissing(missing) && missing.reason).toContain('low-energy side')
    expect(quantityOf('a', 'b', 'c', NaN)).toEqual({
      key: 'a',
      name: 'b',
      unit: 'c',
      value: null,
      reason: 'the value is not finite',
    })
    const list = curveQuantities(rising, '1/meV')
    expect(list.find(({ key }) => key === 'fwhm')).toMatchObject({
      value: null,
      reason: 'the largest value is at the end of the range',
    })
  })
})

describe('moments', () => {
  it('are those of a Gaussian, central from the second on', () => {
    const moments = found(momentsOf(curveOf(axis(1980, 2030, 0.1), (x) => 3 * gaussian(2004, 2)(x))))
    expect(moments.area).toBeCloseTo(3 * 2 * Math.sqrt(2 * Math.PI), 10)
    expect(moments.meanMeV).toBeCloseTo(2004, 10)
    expect(moments.varianceMeV2).toBeCloseTo(4, 9)
    expect(moments.thirdMeV3).toBeCloseTo(0, 8)
  })

  it('need a positive area', () => {
    expect(momentsOf(curveOf(axis(0, 5, 1), () => 0))).toEqual({ reason: 'the area is not positive' })
  })
})

describe('quantities of a model', () => {
  const valuesOf = (list: ReturnType<typeof modelQuantities>) => Object.fromEntries(list.map((q) => [q.key, q]))

  it('give a weight where it exists and a thermal width where it does not', () => {
    const cold = valuesOf(modelQuantities(lineModel({ bath: [powerLaw()], temperatureK: 10 })))
    expect(cold.zeroPhononWeight!.value).toBeGreaterThan(0.3)
    expect(cold.zeroPhononWeight!.value).toBeLessThan(1)
    expect(cold.thermalWidth!.value).toBeNull()
    const thermal = valuesOf(
      modelQuantities(lineModel({ bath: [powerLaw({ exponent: 1, couplingStrength: 0.05 })], temperatureK: 300 })),
    )
    // 2 pi a k_B T.
    expect(thermal.thermalWidth!.value).toBeCloseTo(2 * Math.PI * 0.05 * 0.08617333262 * 300, 6)
    expect(thermal.zeroPhononWeight).toMatchObject({ value: null })
    expect(thermal.zeroPhononWeight!.reason).toContain('bath.0')
  })

  it('tell the Debye-Waller factor from the weight: S = 1, 26 meV, 300 K', () => {
    const list = valuesOf(
      modelQuantities(lineModel({ modes: [{ label: '', energyMeV: 26, huangRhys: 1 }], temperatureK: 300 })),
    )
    expect(list.debyeWallerFactor!.value).toBeCloseTo(0.116079868752, 11)
    expect(list.zeroPhononWeight!.value).toBeCloseTo(0.248204566212, 11)
  })

  it('have a Stokes shift of twice the reorganisation energy between first moments', () => {
    const model = lineModel({ modes: [{ label: '', energyMeV: 10, huangRhys: 1.5 }] })
    const [peaks, means] = stokesShifts(
      model,
      curveOf(axis(1950, 2060, 0.1), gaussian(2012, 6)),
      curveOf(axis(1950, 2060, 0.1), gaussian(1989, 6)),
    )
    expect(means!.value).toBeCloseTo(30, 12)
    expect(peaks!.value).toBeCloseTo(23, 4)
  })
})

describe('two-dimensional quantities', () => {
  // A tilted Gaussian exp(-(a x^2 - 2 b x y + c y^2)/2) has its maximum over y at y = (b/c) x.
  it('give the centre-line slope of a tilted Gaussian', () => {
    const energies = Float64Array.from(axis(1990, 2010, 0.25))
    const [a, b, c] = [1 / 4, 0.16, 1 / 4]
    const n = energies.length
    const map = Float64Array.from({ length: n * n }, (_, j) => {
      const [x, y] = [energies[Math.floor(j / n)]! - 2000.1, energies[j % n]! - 1999.8]
      return Math.exp(-(a * x * x - 2 * b * x * y + c * y * y) / 2)
    })
    const slope = centreLineSlope(map, energies)
    expect(slope.value).toBeCloseTo(b / c, 3)
  })

  it('give slope near 1 for an inhomogeneous and 0 for a homogeneous line', () => {
    const slopeOf = (ensembleFwhmMeV: number) => {
      const bins = { padded: 256, halfBins: 64, stride: 1 }
      const tables = tablesFor(lineModel({ zeroPhononFwhmMeV: 0.4, ensembleFwhmMeV }), 0, 0.15, 200)
      const [r, s] = [signalMap(tables.rephasing, bins), signalMap(tables.nonRephasing, bins)]
      const absorptive = r.re.map((value, i) => value + s.re[i]!)
      return centreLineSlope(absorptive, binEnergies(bins, 4.135667696923859 / 0.15)).value!
    }
    expect(Math.abs(slopeOf(0))).toBeLessThan(0.02)
    expect(slopeOf(4)).toBeGreaterThan(0.9)
    expect(slopeOf(4)).toBeLessThan(1.02)
  })

  it('say why there is no slope', () => {
    const energies = Float64Array.of(1, 2, 3)
    expect(centreLineSlope(Float64Array.of(9, 0, 0, 0, 0, 0, 0, 0, 0), energies)).toMatchObject({
      value: null,
      reason: 'the highest point is at the edge of the map',
    })
  })

  it('call a round peak 0 and a narrow ridge nearly 1 elliptic', () => {
    // D = sqrt2 times the width in E, A = the width in x over sqrt2: round when x is twice as wide as E.
    const q = (value: number | null) => quantityOf('w', 'w', 'meV', value, 'none')
    expect(ellipticity(q(1), q(2)).value).toBeCloseTo(0, 14)
    expect(ellipticity(q(10), q(0.5)).value).toBeGreaterThan(0.99)
    expect(ellipticity(q(null), q(1))).toMatchObject({ value: null, reason: 'none' })
  })
})
