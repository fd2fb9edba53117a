/**
 * g0(t) of a spectral density without a closed form, by quadrature that stays exact at every time.
 *
 *   g0(t) = Int_0^inf dw [ f_T(w) (1 - cos wt) + i f(w) sin wt ],  f = J/(pi w^2),  f_T = f coth(w / 2 th)
 *
 * The axis is cut into panels halved towards w = 0. On each panel f and f_T are expanded in Legendre polynomials, and
 *   Int_(c-h)^(c+h) P_n((w-c)/h) e^{-iwt} dw = 2h (-i)^n j_n(ht) e^{-ict}
 * is exact, so that the number of nodes depends on the shape of J and never on t (Filon's idea; Bakhvalov & Vasil'eva,
 * USSR Comp. Math. Math. Phys. 8, 241 (1968)). Panels that lie wholly below w t = 0.1 enter through the power series of
 * 1 - cos and sin with moments of f, which keeps full relative accuracy for small times and for the 1/w^2 singularity.
 * Below the first panel J is its leading power.
 *
 * Cost: about 0.2 us per panel and time. Accuracy: 1e-13 relative to max(1, |g0|) for exponents from 0.5,
 * (tests/engine/line-broadening.spec.ts); the tail of the Legendre coefficients gives the error estimate.
 */
import type { Continuum, DensityIntegrals } from './bath/continuum'
import { gaussLegendre, legendreAnalysis } from './gauss-legendre'
import { PANEL_TERMS, panelEdges, refineEdges } from './panel-edges'
import { nodesFromPanels } from './panel-nodes'
import { sphericalBessel } from './spherical-bessel'
import type { FrequencyNodes } from './uniform-sums'

const TERMS = PANEL_TERMS
/** Panels below this w t go through the series; its first omitted term is then 5e-15. */
const SERIES_LIMIT = 0.1
const SERIES_TERMS = 4
/** Half-width times t up to which a panel is summed by the power series of e^{-iht z} instead of Bessel functions. */
const POWER_LIMIT = 1
/** 1/19! < 1e-17 */
const POWER_TERMS = 18

export interface FrequencyPanels {
  /** Adds g0(t), t >= 0, to out[0], out[1]; of the panels below index `end` only, when it is given. */
  addAt: (timePs: number, out: Float64Array, end?: number) => void
  /** Index of the first panel that starts at or above a frequency. */
  indexAbove: (frequency: number) => number
  /** Nodes and weights of the panels from index `begin` on, fine enough for plain sums up to a time. */
  nodesFrom: (begin: number, longestPs: number) => FrequencyNodes
  /** Error of g0 by omitted Legendre coefficients, relative to max(1, |g0|). */
  errorEstimate: number
  integrals: DensityIntegrals
}

/**
 * The sum of all terms on one set of panels. th = k_B T / hbar in rad/ps, 0 at T = 0; longestPs bounds the times that
 * will be asked for.
 */
export const buildFrequencyPanels = (terms: readonly Continuum[], th: number, longestPs: number): FrequencyPanels => {
  const lowScale = terms.reduce((least, term) => Math.min(least, term.lowScale), th > 0 ? th : Infinity)
  const lowest = Math.min(1e-7 * lowScale, SERIES_LIMIT / Math.max(longestPs, 1e-12))
  const density = (w: number): number => terms.reduce((sum, term) => (w < term.upper ? sum + term.density(w) : sum), 0)
  const integrand = (w: number): number => {
    const f = density(w) / (Math.PI * w * w)
    return th > 0 ? f / Math.tanh(w / (2 * th)) : f
  }
  const coarse = panelEdges(terms, lowest)
  const edges = terms.some(({ needsRefinement }) => needsRefinement) ? refineEdges(coarse, integrand) : coarse
  const count = edges.length - 1
  const { nodes, weights } = gaussLegendre(TERMS)
  const analysis = legendreAnalysis(TERMS)

  const centres = new Float64Array(count)
  const halves = new Float64Array(count)
  /** 2h (-1)^(n/2) a_n, rows of TERMS per panel: thermal f_T and zero-temperature f. */
  const thermal = new Float64Array(count * TERMS)
  const vacuum = new Float64Array(count * TERMS)
  /** h (-1)^(k/2) / k! Int_-1^1 f z^k dz, rows of POWER_TERMS per panel, for short times. */
  const thermalPower = new Float64Array(count * POWER_TERMS)
  const vacuumPower = new Float64Array(count * POWER_TERMS)
  /** Cumulative moments up to each panel: Int f_T w^(2k+2) and Int f w^(2k+1). */
  const even = new Float64Array((count + 1) * SERIES_TERMS)
  const odd = new Float64Array((count + 1) * SERIES_TERMS)

  for (const { low } of terms) {
    if (low.coefficient === 0) continue
    for (let k = 0; k < SERIES_TERMS; k++) {
      const power = low.exponent + 2 * k
      const vacuumMoment = ((low.coefficient / Math.PI) * Math.pow(lowest, power)) / power
      odd[k]! += vacuumMoment
      even[k]! += th > 0 ? 2 * th * vacuumMoment : (vacuumMoment * lowest * power) / (power + 1)
    }
  }

  const values = new Float64Array(TERMS)
  const thermalValues = new Float64Array(TERMS)
  let largest = 0
  let relative = 0
  let absolute = 0
  for (let panel = 0; panel < count; panel++) {
    const start = edges[panel]!
    const half = (edges[panel + 1]! - start) / 2
    const centre = start + half
    centres[panel] = centre
    halves[panel] = half
    const row = (panel + 1) * SERIES_TERMS
    for (let k = 0; k < SERIES_TERMS; k++) {
      even[row + k] = even[row - SERIES_TERMS + k]!
      odd[row + k] = odd[row - SERIES_TERMS + k]!
    }
    for (let i = 0; i < TERMS; i++) {
      const w = centre + half * nodes[i]!
      const f = density(w) / (Math.PI * w * w)
      const fThermal = th > 0 ? f / Math.tanh(w / (2 * th)) : f
      values[i] = f
      thermalValues[i] = fThermal
      let power = half * weights[i]! * w
      for (let k = 0; k < SERIES_TERMS; k++) {
        odd[row + k]! += f * power
        power *= w
        even[row + k]! += fThermal * power
        power *= w
      }
      let scaled = half * weights[i]!
      for (let k = 0; k < POWER_TERMS; k++) {
        const sign = (k >> 1) % 2 === 0 ? scaled : -scaled
        thermalPower[panel * POWER_TERMS + k]! += sign * fThermal
        vacuumPower[panel * POWER_TERMS + k]! += sign * f
        scaled *= nodes[i]! / (k + 1)
      }
    }
    let size = 0
    let tail = 0
    for (let n = 0; n < TERMS; n++) {
      let a = 0
      let b = 0
      for (let i = 0; i < TERMS; i++) {
        const weight = analysis[n * TERMS + i]!
        a += weight * thermalValues[i]!
        b += weight * values[i]!
      }
      const sign = (n >> 1) % 2 === 0 ? 2 * half : -2 * half
      thermal[panel * TERMS + n] = sign * a
      vacuum[panel * TERMS + n] = sign * b
      if (n >= TERMS - 2) tail = Math.max(tail, Math.abs(a))
      else size = Math.max(size, Math.abs(a))
    }
    largest = Math.max(largest, size * half)
    // What a panel leaves out is a share of what it adds to g0, and at most twice its integral: the smaller counts.
    if (1 <= 2 * half * size) relative = Math.max(relative, tail / size)
    else absolute += 2 * half * tail
  }
  // Panels at the low end that together hold less than rounding of the largest one add nothing to g0 at any time.
  let opening = 0
  for (let below = 0; opening < count; opening++) {
    below += Math.abs(thermal[opening * TERMS]!)
    if (below > 1e-18 * largest) break
  }

  const bessel = new Float64Array(TERMS)
  const addAt = (time: number, out: Float64Array, end = count): void => {
    let first = opening
    while (first < end && edges[first + 1]! * time <= SERIES_LIMIT) first++
    const t2 = time * time
    const row = first * SERIES_TERMS
    let re = 0
    let im = 0
    if (edges[first]! * time <= SERIES_LIMIT) {
      const cosine = even[row + 1]! - (t2 / 30) * (even[row + 2]! - (t2 / 56) * even[row + 3]!)
      const sine = odd[row + 1]! - (t2 / 20) * (odd[row + 2]! - (t2 / 42) * odd[row + 3]!)
      re = (t2 / 2) * (even[row]! - (t2 / 12) * cosine)
      im = time * (odd[row]! - (t2 / 6) * sine)
    }
    for (let panel = first; panel < end; panel++) {
      const x = halves[panel]! * time
      let evenThermal = 0
      let oddThermal = 0
      let evenVacuum = 0
      let oddVacuum = 0
      if (x <= POWER_LIMIT) {
        const square = x * x
        const offset = panel * POWER_TERMS
        for (let k = POWER_TERMS - 2; k >= 0; k -= 2) {
          evenThermal = evenThermal * square + thermalPower[offset + k]!
          oddThermal = oddThermal * square + thermalPower[offset + k + 1]!
          evenVacuum = evenVacuum * square + vacuumPower[offset + k]!
          oddVacuum = oddVacuum * square + vacuumPower[offset + k + 1]!
        }
        oddThermal *= x
        oddVacuum *= x
      } else {
        sphericalBessel(x, TERMS, bessel)
        const offset = panel * TERMS
        for (let n = 0; n < TERMS; n += 2) {
          const j = bessel[n]!
          const next = bessel[n + 1]!
          evenThermal += thermal[offset + n]! * j
          oddThermal += thermal[offset + n + 1]! * next
          evenVacuum += vacuum[offset + n]! * j
          oddVacuum += vacuum[offset + n + 1]! * next
        }
      }
      const phase = centres[panel]! * time
      const c = Math.cos(phase)
      const s = Math.sin(phase)
      re += thermal[panel * TERMS]! - (evenThermal * c - oddThermal * s)
      im += evenVacuum * s + oddVacuum * c
    }
    out[0]! += re
    out[1]! += im
  }

  const indexAbove = (frequency: number): number => {
    let index = 0
    while (index < count && edges[index]! < frequency) index++
    return index
  }

  const last = count * SERIES_TERMS
  let plateau: number | null = 0
  for (const { low } of terms) {
    if (low.coefficient === 0) continue
    // Int f_T below the first panel converges for p > 2, at T = 0 for p > 1; else Re g0 grows without bound.
    const excess = low.exponent - (th > 0 ? 2 : 1)
    const factor = (low.coefficient / Math.PI) * (th > 0 ? 2 * th : 1)
    plateau = excess > 0 && plateau !== null ? plateau + (factor * Math.pow(lowest, excess)) / excess : null
  }
  if (plateau !== null) for (let panel = 0; panel < count; panel++) plateau += thermal[panel * TERMS]!
  return {
    addAt,
    indexAbove,
    nodesFrom: (begin, longest) =>
      nodesFromPanels({ centres, halves, thermal, vacuum }, Math.max(begin, opening), longest),
    errorEstimate: relative + absolute,
    integrals: {
      reorganization: odd[last]!,
      plateau,
      variance: even[last]!,
      third: odd[last + 1]!,
    },
  }
}
