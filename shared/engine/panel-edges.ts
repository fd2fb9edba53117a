/**
 * Edges of the frequency panels: doubling away from 0, no wider than each term allows, with the breaks of tables as edges,
 * and, where a term has no rule of widths (a typed formula), halved until twenty Legendre polynomials hold the integrand.
 * Source: geometric convergence on panels that keep their distance to every singularity (Trefethen, Approximation Theory and
 * Approximation Practice (2013), ch. 8). Spec: tests/engine/quadrature.spec.ts.
 */
import type { Continuum } from './bath/continuum'
import { gaussLegendre, legendreAnalysis } from './gauss-legendre'

/** Legendre polynomials a panel. */
export const PANEL_TERMS = 20

/** Share of the last two coefficients; what follows them is then below 1e-13. */
const REFINED = 3e-12
const DEEPEST = 12

export const panelEdges = (terms: readonly Continuum[], lowest: number): number[] => {
  const forced = terms
    .flatMap(({ upper, breaks }) => [...(breaks ?? []), upper])
    .filter((edge) => edge > lowest)
    .sort((a, b) => a - b)
  const edges = [lowest]
  for (const target of forced) {
    let edge = edges.at(-1)!
    while (edge < target) {
      const width = terms.reduce(
        (least, term) => (term.upper > edge ? Math.min(least, term.panelWidth(edge)) : least),
        edge,
      )
      // The last piece before a target is stretched or halved rather than leaving a sliver.
      const left = target - edge
      edge = left <= 1.01 * width ? target : left < 2 * width ? edge + left / 2 : edge + width
      edges.push(edge)
    }
  }
  return edges
}

/** Largest coefficient, and the larger of the last two, of f on a panel; both times its half width. */
const spectrumOf = (f: (w: number) => number, start: number, end: number): { size: number; tail: number } => {
  const { nodes } = gaussLegendre(PANEL_TERMS)
  const analysis = legendreAnalysis(PANEL_TERMS)
  const half = (end - start) / 2
  const values = nodes.map((node) => f(start + half * (1 + node)))
  const coefficient = (n: number) =>
    Math.abs(values.reduce((sum, value, i) => sum + analysis[n * PANEL_TERMS + i]! * value, 0))
  return {
    size: half * values.reduce((most, value) => Math.max(most, Math.abs(value)), 0),
    tail: half * Math.max(coefficient(PANEL_TERMS - 1), coefficient(PANEL_TERMS - 2)),
  }
}

/** Halves panels until f is resolved on each, relative to the panel itself or to rounding of max(1, |g0|). */
export const refineEdges = (edges: readonly number[], f: (w: number) => number): number[] => {
  const out = [edges[0]!]
  const cover = (start: number, end: number, depth: number): void => {
    const { size, tail } = spectrumOf(f, start, end)
    if (tail <= REFINED * size || tail <= 1e-16 || depth === 0) {
      out.push(end)
      return
    }
    const middle = (start + end) / 2
    cover(start, middle, depth - 1)
    cover(middle, end, depth - 1)
  }
  edges.slice(1).forEach((end, k) => cover(edges[k]!, end, DEEPEST))
  return out
}
