import { describe, expect, it } from 'vitest'
import { powerLawContinuum } from '../../shared/engine/bath/power-law'
import { logNormalContinuum } from '../../shared/engine/bath/log-normal'
import { tabulatedContinuum } from '../../shared/engine/bath/tabulated'
import { buildFrequencyPanels } from '../../shared/engine/frequency-panels'
import { gaussLegendre, legendreAnalysis } from '../../shared/engine/gauss-legendre'
import { panelEdges, refineEdges } from '../../shared/engine/panel-edges'
import { largest, powerLaw, relativeError } from './support'

describe('Gauss-Legendre rule', () => {
  it('has the nodes and weights of the handbook', () => {
    // Abramowitz & Stegun (1964), table 25.4, n = 5 and n = 20 (outermost pair).
    const five = gaussLegendre(5)
    expect(five.nodes[4]).toBeCloseTo(0.906179845938664, 15)
    expect(five.weights[2]).toBeCloseTo(0.568888888888889, 15)
    expect(five.nodes[2]).toBe(0)
    expect(gaussLegendre(20).nodes[19]).toBeCloseTo(0.993128599185094, 14)
    expect(gaussLegendre(20).weights[19]).toBeCloseTo(0.01761400713915212, 15)
  })

  it('integrates x^(2n-2) and nothing odd, to rounding', () => {
    for (const n of [1, 2, 7, 20, 56]) {
      const { nodes, weights } = gaussLegendre(n)
      const integral = (power: number) => nodes.reduce((sum, x, i) => sum + weights[i]! * x ** power, 0)
      expect(relativeError(integral(2 * n - 2), 2 / (2 * n - 1))).toBeLessThan(1e-13)
      expect(Math.abs(integral(2 * n - 1))).toBeLessThan(1e-15)
      // One degree more is beyond the rule.
      expect(relativeError(integral(2 * n), 2 / (2 * n + 1))).toBeGreaterThan(n < 20 ? 1e-9 : 0)
    }
  })

  it('analyses a Legendre polynomial into itself', () => {
    const n = 8
    const { nodes } = gaussLegendre(n)
    const matrix = legendreAnalysis(n)
    const p3 = nodes.map((x) => (5 * x ** 3 - 3 * x) / 2)
    for (let m = 0; m < n; m++) {
      const coefficient = p3.reduce((sum, value, i) => sum + matrix[m * n + i]! * value, 0)
      expect(coefficient).toBeCloseTo(m === 3 ? 1 : 0, 14)
    }
  })
})

describe('panels in frequency', () => {
  it('double away from 0, respect the widest panel and end at the end', () => {
    const term = powerLawContinuum(powerLaw())
    const edges = panelEdges([term], 1e-5)
    expect(edges[0]).toBe(1e-5)
    expect(edges.at(-1)).toBe(term.upper)
    edges.slice(1).forEach((end, k) => {
      const width = end - edges[k]!
      expect(width).toBeGreaterThan(0)
      expect(width).toBeLessThanOrEqual(1.0101 * Math.min(edges[k]!, term.panelWidth(edges[k]!)))
    })
  })

  it('pass through every point of a table', () => {
    const term = tabulatedContinuum({
      kind: 'tabulated',
      energiesMeV: [0.5, 0.6, 2.2, 5],
      densityMeV: [0, 1, 1, 0],
      lowEnergyExponent: 3,
    })
    const edges = panelEdges([term], 1e-4)
    for (const point of term.breaks!) expect(edges).toContain(point)
  })

  it('are halved towards a sharp peak, and left alone where nothing is sharp', () => {
    const coarse = [1, 2, 4, 8]
    expect(refineEdges(coarse, (w) => 1 / w)).toEqual(coarse)
    const fine = refineEdges(coarse, (w) => 1 / ((w - 3) ** 2 + 1e-4))
    const narrowest = Math.min(...fine.slice(1).map((end, k) => end - fine[k]!))
    expect(narrowest).toBeLessThan(0.05)
    expect(fine.length).toBeLessThan(40)
  })

  it('hand out nodes whose plain sums give g0', () => {
    const panels = buildFrequencyPanels([powerLawContinuum(powerLaw({ exponent: 5 }))], 0.5, 30)
    const { frequencies, thermal, vacuum } = panels.nodesFrom(0, 30)
    for (const time of [0.02, 1, 29]) {
      const out = new Float64Array(2)
      panels.addAt(time, out)
      const re = frequencies.reduce((sum, w, m) => sum + thermal[m]! * 2 * Math.sin((w * time) / 2) ** 2, 0)
      const im = frequencies.reduce((sum, w, m) => sum + vacuum[m]! * Math.sin(w * time), 0)
      expect(largest([Math.abs(re - out[0]!), Math.abs(im - out[1]!)])).toBeLessThan(1e-13 * Math.max(1, out[0]!))
    }
  })

  it('say how large their own error is: too few polynomials on too wide a panel show', () => {
    const sharp = logNormalContinuum({ kind: 'logNormal', huangRhys: 1, energyMeV: 5, relativeWidth: 0.05 })
    const good = buildFrequencyPanels([sharp], 0.5, 10)
    const bad = buildFrequencyPanels([{ ...sharp, panelWidth: () => Infinity }], 0.5, 10)
    const [a, b] = [new Float64Array(2), new Float64Array(2)]
    good.addAt(2, a)
    bad.addAt(2, b)
    const error = Math.hypot(a[0]! - b[0]!, a[1]! - b[1]!) / Math.max(1, Math.hypot(...a))
    expect(error).toBeGreaterThan(10 * good.errorEstimate)
    expect(bad.errorEstimate).toBeGreaterThan(error / 10)
  })
})
