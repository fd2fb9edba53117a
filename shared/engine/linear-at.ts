/**
 * Absorption and emission at any energies by direct integration, to about 1e-10 of the maximum: reference values, and widths
 * that no grid limits.
 *
 *   A(E) = (1/(pi hbar)) Re Int_0^T dt exp(i (E - E0) t/hbar) exp(-g0(t) - gam t - sig^2 t^2/2)
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | E | energiesMeV | meV | any |
 * | A, F | values | 1/meV, area 1 | as energiesMeV |
 *
 * Source: Kubo (1962); Mukamel (1995), ch. 8. Gauss-Legendre panels of 16 nodes on which no phase turns by more than ten
 * radians; the first one is halved towards t = 0. The window leaves 1e-12 of the signal. Cost: nodes x energies; the model
 * must allow a linear spectrum (chooseLinearGrid), else RangeError. Spec: tests/engine/linear.spec.ts.
 */
import { decayWindow, ensembleSigma, homogeneousRate, linearDecay, withEnsemble } from './coherence-decay'
import { HBAR_MEV_PS } from './constants'
import { gaussLegendre } from './gauss-legendre'
import { lineBroadeningAt } from './line-broadening'
import { isMissing, peakOf, widthOf, type Width } from './measured'
import { chooseLinearGrid, decayTimes } from './grid'
import { sidebandReach } from './sideband-reach'
import { linearOnGrid } from './stages'
import type { LineModel } from './types'

const NODES = 16
const LARGEST_PHASE = 10
const CUT = 1e-12
const LOST = 1e-12
const HALVINGS = 8
const LARGEST_COUNT = 4_000_000

/** Function that gives A at an energy within `farthestMeV` of E0. */
export const absorptionFunction = (model: LineModel, farthestMeV: number): ((energyMeV: number) => number) => {
  const bounds = sidebandReach(model)
  const reach = Math.max(bounds.above(LOST), bounds.below(LOST))
  const window = decayWindow(
    withEnsemble(linearDecay(model, decayTimes(reach, model)), model),
    CUT,
    homogeneousRate(model),
  )
  const panel = (LARGEST_PHASE * HBAR_MEV_PS) / (farthestMeV + reach + model.zeroPhononFwhmMeV)
  const count = Math.ceil(window / panel) + HALVINGS
  if (!(count * NODES <= LARGEST_COUNT)) {
    throw new RangeError(
      `expected a signal of at most ${LARGEST_COUNT} nodes; found a window of ${window} ps with panels of ${panel} ps`,
    )
  }
  const { nodes, weights } = gaussLegendre(NODES)
  const times = new Float64Array(count * NODES)
  const re = new Float64Array(count * NODES)
  const im = new Float64Array(count * NODES)
  const edge = (k: number) => (k === 0 ? 0 : k <= HALVINGS ? panel * 2 ** (k - HALVINGS) : panel * (k - HALVINGS + 1))
  for (let k = 0; k < count; k++) {
    // The last halved edge is one panel wide, so that whole panels follow.
    const from = edge(k)
    const to = k < HALVINGS ? edge(k + 1) : from + panel
    for (let i = 0; i < NODES; i++) {
      times[k * NODES + i] = (from + to) / 2 + ((to - from) / 2) * nodes[i]!
      re[k * NODES + i] = ((to - from) / 2) * weights[i]!
    }
  }
  const broadening = lineBroadeningAt(model, model.temperatureK, times)
  const gam = homogeneousRate(model)
  const sig = ensembleSigma(model)
  for (let j = 0; j < times.length; j++) {
    const t = times[j]!
    const size = re[j]! * Math.exp(-broadening.re[j]! - gam * t - 0.5 * (sig * t) ** 2)
    re[j] = size * Math.cos(broadening.im[j]!)
    im[j] = -size * Math.sin(broadening.im[j]!)
  }
  return (energyMeV) => {
    const w = (energyMeV - model.zeroPhononEnergyMeV) / HBAR_MEV_PS
    let sum = 0
    for (let j = 0; j < times.length; j++) {
      const phase = w * times[j]!
      sum += re[j]! * Math.cos(phase) - im[j]! * Math.sin(phase)
    }
    return sum / (Math.PI * HBAR_MEV_PS)
  }
}

const farthest = (model: LineModel, energies: Float64Array): number =>
  energies.reduce((most, energy) => Math.max(most, Math.abs(energy - model.zeroPhononEnergyMeV)), 0)

export const absorptionAt = (model: LineModel, energiesMeV: Float64Array): Float64Array =>
  energiesMeV.map(absorptionFunction(model, farthest(model, energiesMeV)))

/** The mirror image about E0. */
export const emissionAt = (model: LineModel, energiesMeV: Float64Array): Float64Array => {
  const absorption = absorptionFunction(model, farthest(model, energiesMeV))
  return energiesMeV.map((energy) => absorption(2 * model.zeroPhononEnergyMeV - energy))
}

export interface ExactWidth extends Width {
  peakEnergyMeV: number
  peakPerMeV: number
}

const HALVING_STEPS = 60
const GOLDEN = (Math.sqrt(5) - 1) / 2

/** Steps of the golden section: a bracket of 1e-5 of the first one, where rounding does not yet blur the comparison. */
const GOLDEN_STEPS = 24

/** Maximum between low and high: golden section, then secant steps on a fourth-order slope, to about 1e-10 of the bracket. */
const refinedPeak = (f: (x: number) => number, low: number, high: number): number => {
  let [a, b] = [low, high]
  for (let step = 0; step < GOLDEN_STEPS; step++) {
    const left = b - GOLDEN * (b - a)
    const right = a + GOLDEN * (b - a)
    if (f(left) < f(right)) a = left
    else b = right
  }
  const h = 0.01 * (high - low)
  const slope = (x: number) => (8 * (f(x + h) - f(x - h)) - (f(x + 2 * h) - f(x - 2 * h))) / (12 * h)
  let [x0, x1] = [(a + b) / 2 - h, (a + b) / 2]
  let s0 = slope(x0)
  for (let step = 0; step < 4; step++) {
    const s1 = slope(x1)
    const next = x1 - (s1 * (x1 - x0)) / (s1 - s0)
    if (!Number.isFinite(next) || Math.abs(next - x1) > h) break
    ;[x0, s0, x1] = [x1, s1, next]
  }
  return x1
}

const root = (f: (x: number) => number, low: number, high: number): number => {
  let [a, b] = [low, high]
  const rising = f(b) > f(a)
  for (let step = 0; step < HALVING_STEPS; step++) {
    const middle = (a + b) / 2
    if (f(middle) < 0 === rising) a = middle
    else b = middle
  }
  return (a + b) / 2
}

/**
 * FWHM of the absorption by root finding on the time integral, from the global maximum outward to the first
 * half-maximum crossing on either side. Throws RangeError where the model has no spectrum or no such crossing.
 */
export const absorptionFwhm = (model: LineModel): ExactWidth => {
  const choice = chooseLinearGrid(model)
  if (!choice.ok) throw new RangeError(choice.issues.map(({ message }) => message).join('; '))
  const { spectra } = linearOnGrid(model, choice.grid)
  const curve = { energiesMeV: spectra.energiesMeV, values: spectra.absorption }
  const peak = peakOf(curve)
  if (isMissing(peak)) throw new RangeError(`expected a peak; found ${peak.reason}`)
  const width = widthOf(curve, peak)
  if (isMissing(width)) throw new RangeError(`expected a width; found ${width.reason}`)
  const step = choice.grid.energyStepMeV * choice.grid.stride
  const f = absorptionFunction(model, choice.grid.viewMeV + step)
  const peakEnergyMeV = refinedPeak(f, peak.energyMeV - step, peak.energyMeV + step)
  const peakPerMeV = f(peakEnergyMeV)
  const crossing = (near: number) => root((energy) => f(energy) - peakPerMeV / 2, near - step, near + step)
  const leftMeV = crossing(width.leftMeV)
  const rightMeV = crossing(width.rightMeV)
  return { fwhmMeV: rightMeV - leftMeV, leftMeV, rightMeV, peakEnergyMeV, peakPerMeV }
}
