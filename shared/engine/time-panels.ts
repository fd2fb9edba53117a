/**
 * A smooth g0(t) turned into piecewise polynomials, so that many times cost little more than a few hundred.
 *
 * Panels double in length away from t = 0, where g0 varies on its shortest scale; each holds the interpolation polynomial
 * through 16 Chebyshev points and is halved until its last coefficients are below the tolerance (Trefethen, Approximation
 * Theory and Approximation Practice (2013), chs. 3 and 8). On the panel that starts at t = 0 the interpolated functions are
 * Re g0/t^2 and Im g0/t: small times keep full relative accuracy and Re g0 its sign.
 *
 * Cost: 16 evaluations of g0 a panel, then 25 ns a time. Error estimate: the largest last coefficient, relative to
 * max(1, |g0|) (tests/engine/line-broadening.spec.ts compares with direct evaluation).
 */
import type { PointBroadening } from './bath/continuum'

const POINTS = 16
const TOLERANCE = 4e-13

interface TimePanel {
  start: number
  end: number
  /** Values on this panel are coefficients of Re g0/t^2 and Im g0/t. */
  reduced: boolean
  /** Monomial coefficients in x = (2t - start - end)/(end - start). */
  re: Float64Array
  im: Float64Array
  error: number
}

const chebyshevPoints = Float64Array.from({ length: POINTS }, (_, i) => Math.cos((Math.PI * (i + 0.5)) / POINTS))

/** Row n: the monomial coefficients of T_n. */
const chebyshevToMonomial = (): Float64Array => {
  const rows = new Float64Array(POINTS * POINTS)
  rows[0] = 1
  rows[POINTS + 1] = 1
  for (let n = 2; n < POINTS; n++) {
    for (let k = 0; k < POINTS; k++) {
      const shifted = k > 0 ? 2 * rows[(n - 1) * POINTS + k - 1]! : 0
      rows[n * POINTS + k] = shifted - rows[(n - 2) * POINTS + k]!
    }
  }
  return rows
}

/** Row n, column i: values at the Chebyshev points -> coefficient of T_n. */
const analysis = Float64Array.from(
  { length: POINTS * POINTS },
  (_, index) =>
    ((index < POINTS ? 1 : 2) / POINTS) *
    Math.cos((Math.PI * Math.floor(index / POINTS) * ((index % POINTS) + 0.5)) / POINTS),
)
const monomials = chebyshevToMonomial()

const toChebyshev = (values: Float64Array): Float64Array => {
  const out = new Float64Array(POINTS)
  for (let n = 0; n < POINTS; n++) {
    let sum = 0
    for (let i = 0; i < POINTS; i++) sum += analysis[n * POINTS + i]! * values[i]!
    out[n] = sum
  }
  return out
}

/** Safe because the coefficients fall faster than 2.4^-n, the growth of the coefficients of T_n. */
const toMonomial = (chebyshev: Float64Array): Float64Array => {
  const out = new Float64Array(POINTS)
  for (let n = 0; n < POINTS; n++) {
    for (let k = n & 1; k <= n; k += 2) out[k]! += chebyshev[n]! * monomials[n * POINTS + k]!
  }
  return out
}

const tailOf = (chebyshev: Float64Array): number =>
  Math.max(Math.abs(chebyshev[POINTS - 1]!), Math.abs(chebyshev[POINTS - 2]!), Math.abs(chebyshev[POINTS - 3]!) / 8)

const fitPanel = (evaluate: PointBroadening, start: number, end: number): TimePanel => {
  const reduced = start === 0
  const re = new Float64Array(POINTS)
  const im = new Float64Array(POINTS)
  const out = new Float64Array(2)
  let size = 0
  for (let i = 0; i < POINTS; i++) {
    const time = (start + end) / 2 + ((end - start) / 2) * chebyshevPoints[i]!
    out.fill(0)
    evaluate(time, out)
    size = Math.max(size, Math.hypot(out[0]!, out[1]!))
    re[i] = reduced ? out[0]! / (time * time) : out[0]!
    im[i] = reduced ? out[1]! / time : out[1]!
  }
  const reSeries = toChebyshev(re)
  const imSeries = toChebyshev(im)
  const weight = reduced ? end : 1
  const tail = Math.max(tailOf(reSeries) * weight * weight, tailOf(imSeries) * weight)
  return { start, end, reduced, re: toMonomial(reSeries), im: toMonomial(imSeries), error: tail / Math.max(1, size) }
}

export interface TimePanels {
  /** Adds g0 at the times to re and im; times within the range the panels were built for. */
  addTo: (timesPs: Float64Array, re: Float64Array, im: Float64Array) => void
  errorEstimate: number
}

/**
 * Panels for times from `start` > 0 to `end`; `firstTime` is the scale on which g0 varies first. undefined when more than
 * `maxPanels` would be needed: g0 is then not smooth enough for this method.
 */
export const buildTimePanels = (
  evaluate: PointBroadening,
  range: { start: number; end: number; firstTime: number },
  maxPanels: number,
): TimePanels | undefined => {
  const panels: TimePanel[] = []
  /** Halves until the tolerance is met; false when the panels run out. Pieces before the range hold no times. */
  const cover = (start: number, end: number, depth: number): boolean => {
    if (end < range.start) return true
    const panel = fitPanel(evaluate, start, end)
    if (panel.error <= TOLERANCE || depth === 0) {
      panels.push(panel)
      return panels.length <= maxPanels
    }
    const middle = (start + end) / 2
    return panels.length < maxPanels && cover(start, middle, depth - 1) && cover(middle, end, depth - 1)
  }
  let edge = 0
  while (edge < range.end) {
    const wider = edge < 8 * range.firstTime ? edge + Math.max(range.firstTime, edge / 2) : 2 * edge
    const start = edge === 0 ? 0 : Math.max(edge, range.start)
    if (wider > range.start && !cover(start, Math.min(wider, range.end), 30)) return undefined
    edge = wider
  }
  const edges = Float64Array.from(panels, (panel) => panel.end)
  return {
    errorEstimate: panels.reduce((worst, panel) => Math.max(worst, panel.error), 0),
    addTo: (times, re, im) => addPanels(panels, edges, times, re, im),
  }
}

/** Runs of ascending times inside one panel are handled together, so that a grid pays one search a panel. */
const addPanels = (
  panels: TimePanel[],
  edges: Float64Array,
  times: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void => {
  let index = 0
  while (index < times.length) {
    const panel = panels[findPanel(edges, times[index]!)]!
    let stop = index + 1
    while (stop < times.length && times[stop]! <= panel.end && times[stop]! >= panel.start) stop++
    evaluatePanel(panel, times, re, im, index, stop)
    index = stop
  }
}

const findPanel = (edges: Float64Array, time: number): number => {
  let low = 0
  let high = edges.length - 1
  while (low < high) {
    const middle = (low + high) >> 1
    if (edges[middle]! < time) low = middle + 1
    else high = middle
  }
  return low
}

/** Even and odd powers apart: four independent chains keep the processor's two multipliers busy. */
const evaluatePanel = (
  panel: TimePanel,
  times: Float64Array,
  re: Float64Array,
  im: Float64Array,
  first: number,
  stop: number,
): void => {
  const { re: a, im: b, reduced } = panel
  const scale = 2 / (panel.end - panel.start)
  const centre = (panel.end + panel.start) / 2
  for (let index = first; index < stop; index++) {
    const time = times[index]!
    const x = (time - centre) * scale
    const square = x * x
    let evenRe = a[POINTS - 2]!
    let oddRe = a[POINTS - 1]!
    let evenIm = b[POINTS - 2]!
    let oddIm = b[POINTS - 1]!
    for (let k = POINTS - 4; k >= 0; k -= 2) {
      evenRe = evenRe * square + a[k]!
      oddRe = oddRe * square + a[k + 1]!
      evenIm = evenIm * square + b[k]!
      oddIm = oddIm * square + b[k + 1]!
    }
    const valueRe = evenRe + x * oddRe
    const valueIm = evenIm + x * oddIm
    re[index]! += reduced ? valueRe * time * time : valueRe
    im[index]! += reduced ? valueIm * time : valueIm
  }
}
