/**
 * Nodes and weights in frequency made from Legendre expansions on panels, fine enough for plain sums of cos wt and sin wt
 * up to a time: what the non-uniform Fourier transform needs.
 * Source: Gauss-Legendre rules of `gauss-legendre.ts`; Jacobi-Anger growth of e^{iz} for their order (Abramowitz & Stegun
 * (1964), 9.1.44). Spec: tests/engine/quadrature.spec.ts.
 */
import { gaussLegendre } from './gauss-legendre'
import { PANEL_TERMS } from './panel-edges'
import type { FrequencyNodes } from './uniform-sums'

/** Expansions as `frequency-panels.ts` keeps them: 2h (-1)^floor(n/2) a_n, rows of PANEL_TERMS. */
export interface PanelExpansions {
  centres: Float64Array
  halves: Float64Array
  thermal: Float64Array
  vacuum: Float64Array
}

/** Radians of w t per piece of a panel: longer ones would need ever new Gauss rules. */
const PIECE = 60

/** Value at z in [-1, 1] times the panel's width, by Clenshaw's recurrence. */
const valueAt = (coefficients: Float64Array, panel: number, z: number): number => {
  let later = 0
  let value = 0
  for (let n = PANEL_TERMS - 1; n >= 0; n--) {
    const sign = (n >> 1) % 2 === 0 ? 1 : -1
    const coefficient = sign * coefficients[panel * PANEL_TERMS + n]!
    const next = coefficient + ((2 * n + 1) / (n + 1)) * z * value - ((n + 1) / (n + 2)) * later
    later = value
    value = next
  }
  return value
}

/** Polynomials that a panel really uses, at rounding of its largest. */
const degreeOf = (coefficients: Float64Array, panel: number): number => {
  const row = coefficients.subarray(panel * PANEL_TERMS, (panel + 1) * PANEL_TERMS)
  const size = row.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
  return Math.max(
    0,
    row.findLastIndex((value) => Math.abs(value) > 1e-16 * size),
  )
}

export const nodesFromPanels = (
  { centres, halves, thermal, vacuum }: PanelExpansions,
  begin: number,
  longestPs: number,
): FrequencyNodes => {
  const rules = Array.from({ length: centres.length - begin }, (_, k) => {
    const panel = begin + k
    const pieces = Math.ceil((halves[panel]! * longestPs) / PIECE)
    const phase = (halves[panel]! * longestPs) / pieces
    // e^{i phase z} acts as a polynomial of degree phase + 14 + 4 phase^(1/3); n nodes integrate degree 2n - 1.
    const degree = degreeOf(thermal, panel) + phase + 14 + 4 * Math.cbrt(phase)
    return { panel, pieces, rule: gaussLegendre(4 * Math.ceil(degree / 8)) }
  })
  const total = rules.reduce((sum, { pieces, rule }) => sum + pieces * rule.nodes.length, 0)
  const out = {
    frequencies: new Float64Array(total),
    thermal: new Float64Array(total),
    vacuum: new Float64Array(total),
  }
  let index = 0
  for (const { panel, pieces, rule } of rules) {
    for (let piece = 0; piece < pieces; piece++) {
      for (let i = 0; i < rule.nodes.length; i++) {
        const z = (2 * piece + 1 + rule.nodes[i]!) / pieces - 1
        const weight = rule.weights[i]! / (2 * pieces)
        out.frequencies[index] = centres[panel]! + halves[panel]! * z
        out.thermal[index] = weight * valueAt(thermal, panel, z)
        out.vacuum[index] = weight * valueAt(vacuum, panel, z)
        index++
      }
    }
  }
  return out
}
