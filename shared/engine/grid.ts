/**
 * Grids that follow from the widths: time step, window and zero padding of linear spectra and of two-dimensional maps.
 *
 * - Step: the span 2 pi hbar / dt holds twice the reach of the sidebands (`sideband-reach.ts`: beyond it lies less than
 *   `lostMass` of the intensity) and a margin of homogeneous widths, so that nothing folds back into the view; with an
 *   ensemble dt sig <= 0.6. The wings of the Lorentzian that fold back all the same are corrected in closed form.
 * - Window: until less than `cutFraction` of the signal's time integral is left (`coherence-decay.ts`): the total decay,
 *   homogeneous and thermal; a linear signal also ends with the ensemble, an echo does not.
 * - Padding: until the narrowest line holds ten points or more, within the limits.
 *
 * Limits: 2^20 samples in one dimension, 4096 a side in two. A model that needs more, or whose signal never ends, is
 * refused with the field to change. Spec: tests/engine/grid.spec.ts.
 */
import type { Issue } from '../errors/app-error'
import type { GridOverride } from '../schemas/parameter-set'
import type { GridDescription } from '../schemas/run'
import { limits } from '../utils/limits'
import {
  decayIntegral,
  decayWindow,
  echoDecay,
  ensembleSigma,
  homogeneousRate,
  linearDecay,
  octaveTimes,
  withEnsemble,
  type Decay,
} from './coherence-decay'
import { PLANCK_MEV_PS } from './constants'
import { nextPowerOfTwo } from './fft'
import { sidebandReach } from './sideband-reach'
import type { LineModel } from './types'

export interface SpectralGrid extends GridDescription {
  /** Half of the energy range around E0 that is kept and shown, meV. */
  viewMeV: number
  /** Bins of the padded transform kept on either side of E0: -halfBins .. halfBins - 1, times `stride`. */
  halfBins: number
  stride: number
  /** True where a person's own step or number of samples is coarser or shorter than the widths ask for. */
  warnings: string[]
}

export interface Refusal {
  ok: false
  code: 'run/grid-too-large' | 'engine/invalid'
  issues: Issue[]
}
export type GridResult = { ok: true; grid: SpectralGrid } | Refusal

interface Rules {
  name: string
  lostMass: number
  shownMass: number
  marginWidths: number
  cutFraction: number
  /** Points that the narrowest line gets by zero padding. */
  pointsPerWidth: number
  samples: number
  /** Bins a side that are kept. */
  kept: number
}

const LINEAR: Rules = {
  name: 'linear spectra',
  lostMass: 1e-10,
  shownMass: 1e-4,
  marginWidths: 20,
  cutFraction: 1e-9,
  pointsPerWidth: 16,
  samples: limits.linearSamples,
  kept: limits.linearSamples,
}

const MAP: Rules = {
  name: 'two-dimensional maps',
  lostMass: 1e-5,
  shownMass: 3e-2,
  marginWidths: 8,
  cutFraction: 3e-5,
  pointsPerWidth: 8,
  samples: limits.mapSamples,
  kept: 512,
}

/** Octaves of time that the decay is followed over: the longest window that could be allowed. */
const OCTAVES = 21

const inWords = (value: number): string => Number(value.toPrecision(3)).toString()

/** Three digits, downward: readable, and the same on every machine whatever the last bit of a logarithm. */
const roundedDown = (value: number): number => {
  const unit = 10 ** (Math.floor(Math.log10(value)) - 2)
  return Number((Math.floor((value / unit) * (1 + 1e-9)) * unit).toPrecision(3))
}

/**
 * Total homogeneous width, zero-phonon plus thermal, meV: 2 hbar times the slope of D where the signal is about to end,
 * but not more than 2 hbar / Int exp(-D), because the slope of a Gaussian keeps growing.
 */
const lateWidthMeV = (decay: Decay, model: LineModel): number => {
  const { times, exponent } = decay
  const last = exponent.findIndex((value) => value > 30)
  const k = last > 0 ? last : times.length - 1
  const rate = (exponent[k]! - exponent[k - 1]!) / (times[k]! - times[k - 1]!)
  const slowest = Math.max(homogeneousRate(model), Math.min(rate, 1 / decayIntegral(decay)))
  return (slowest * PLANCK_MEV_PS) / Math.PI
}

const withoutDecay = (rules: Rules, model: LineModel, fields: string[]): Refusal => ({
  ok: false,
  code: 'engine/invalid',
  issues: fields.map((field) => ({
    path: [field],
    message:
      `expected a width above 0 meV, because at ${inWords(model.temperatureK)} K the signal of ${rules.name} would never decay; ` +
      `found ${field} = 0 and no thermal width from the bath`,
  })),
})

interface Choice {
  rules: Rules
  model: LineModel
  window: number
  /** Reach of sidebands and ensemble, meV. */
  reach: number
  shown: number
  width: number
  override: { stepPs?: number; samples?: number; stepField: string; samplesField: string }
}

const chosen = (choice: Choice): GridResult => {
  const { rules, model, window, reach, shown, width, override } = choice
  const sig = ensembleSigma(model)
  const needed = PLANCK_MEV_PS / (2 * (reach + rules.marginWidths * width))
  const ownStep = roundedDown(sig > 0 ? Math.min(needed, 0.6 / sig) : needed)
  const stepPs = override.stepPs ?? ownStep
  const ownSamples = 8 * Math.ceil(window / stepPs / 8)
  const samples = override.samples ?? Math.max(16, ownSamples)
  if (samples > rules.samples) {
    return {
      ok: false,
      code: 'run/grid-too-large',
      issues: [
        {
          path: [
            override.stepPs === undefined ? 'zeroPhononFwhmMeV' : 'grid',
            ...(override.stepPs === undefined ? [] : [override.stepField]),
          ],
          message:
            `expected ${rules.name} at ${inWords(model.temperatureK)} K to fit into ${rules.samples} samples; found that a total ` +
            `homogeneous width of ${inWords(width)} meV beside sidebands that reach ${inWords(reach)} meV needs ${samples} ` +
            `(step ${inWords(stepPs)} ps, window ${inWords(window)} ps). Widen the line, or set a step or a number of samples of your own`,
        },
      ],
    }
  }
  const spanMeV = PLANCK_MEV_PS / stepPs
  // Linear lines and the diagonal of a map have the ensemble width, cuts of a map do not.
  const narrowest = rules === LINEAR ? Math.max(width, model.ensembleFwhmMeV) : width
  const viewMeV = Math.min(spanMeV / 2, shown)
  let padded = Math.min(
    nextPowerOfTwo(Math.max(samples, (rules.pointsPerWidth * spanMeV) / narrowest)),
    Math.max(nextPowerOfTwo(samples), rules.samples),
  )
  const stored = (length: number) => 2 * Math.ceil((viewMeV * length) / spanMeV / 2) * 2
  while (stored(padded) > rules.kept && padded / 2 >= samples) padded /= 2
  const stride = Math.ceil(stored(padded) / rules.kept)
  const halfBins = Math.min(stored(padded) / 2, Math.floor(padded / 2))
  const kept = Math.max(2, 2 * Math.floor(halfBins / stride / 2))
  const warnings: string[] = []
  if (stepPs > ownStep * 1.001) {
    warnings.push(
      `${override.stepField}: the step of ${inWords(stepPs)} ps spans ${inWords(spanMeV)} meV; the sidebands ask for ${inWords(ownStep)} ps, so parts of them fold back.`,
    )
  }
  if (samples * stepPs < 0.99 * window) {
    warnings.push(
      `${override.samplesField}: ${samples} samples end at ${inWords(samples * stepPs)} ps; the widths ask for ${inWords(window)} ps, so the lines are cut and ripple.`,
    )
  }
  const reason =
    `Step ${inWords(stepPs)} ps ${override.stepPs === undefined ? '' : '(set by hand) '}spans ${inWords(spanMeV)} meV: sidebands and ensemble reach ${inWords(reach)} meV either side of E0. ` +
    `Window ${inWords(samples * stepPs)} ps ${override.samples === undefined ? '' : '(set by hand) '}for a total homogeneous width of ${inWords(width)} meV` +
    `${model.ensembleFwhmMeV > 0 ? ` and an ensemble width of ${inWords(model.ensembleFwhmMeV)} meV` : ''}. ` +
    `Padded to ${padded} for an energy step of ${inWords(spanMeV / padded)} meV; ${inWords((kept * stride * spanMeV) / padded)} meV around E0 are kept` +
    `${stride > 1 ? `, every ${stride}th point` : ''}.`
  return {
    ok: true,
    grid: {
      timeStepPs: stepPs,
      samples,
      paddedSamples: padded,
      energyStepMeV: spanMeV / padded,
      spanMeV,
      reason,
      viewMeV,
      halfBins: kept,
      stride,
      warnings,
    },
  }
}

/** Shortest time of interest: a twentieth of the inverse span of everything that moves; then three an octave. */
export const decayTimes = (reach: number, model: LineModel): Float64Array => {
  const fastest = reach + model.zeroPhononFwhmMeV + model.ensembleFwhmMeV
  const shortest = fastest > 0 ? PLANCK_MEV_PS / fastest / 20 : 1e-3
  return octaveTimes(shortest, shortest * 2 ** OCTAVES)
}

interface Scales {
  /** Largest distance from E0 beyond which the fraction `mass` lies, either side, meV. */
  reach: (mass: number) => number
  /** Without the ensemble. */
  bare: Decay
  width: number
}

/** Both grids of a model rest on these; they are kept as long as the model is. */
const known = new WeakMap<LineModel, Scales>()

const scalesOf = (model: LineModel): Scales => {
  const kept = known.get(model)
  if (kept) return kept
  const { above, below } = sidebandReach(model)
  const reach = (mass: number) => Math.max(above(mass), below(mass))
  const bare = linearDecay(model, decayTimes(reach(LINEAR.lostMass), model))
  const scales = { reach, bare, width: lateWidthMeV(bare, model) }
  known.set(model, scales)
  return scales
}

/** Grid of absorption and emission. */
export const chooseLinearGrid = (model: LineModel, override: GridOverride = {}): GridResult => {
  const { reach, bare, width } = scalesOf(model)
  const window = decayWindow(withEnsemble(bare, model), LINEAR.cutFraction, homogeneousRate(model))
  if (window === Infinity) return withoutDecay(LINEAR, model, ['zeroPhononFwhmMeV', 'ensembleFwhmMeV'])
  return chosen({
    rules: LINEAR,
    model,
    window,
    reach: reach(LINEAR.lostMass),
    shown: reach(LINEAR.shownMass) + 6 * width,
    width,
    override: {
      stepPs: override.linearTimeStepPs,
      samples: override.linearSamples,
      stepField: 'linearTimeStepPs',
      samplesField: 'linearSamples',
    },
  })
}

/**
 * Grid of the two-dimensional maps of one temperature. The window is the longer one of the two that a rephasing map
 * has: along its axes, where the linear signal decays, and along t1 = t3, where only the homogeneous decay counts. The
 * shortest waiting time has the longest echo.
 */
export const chooseMapGrid = (model: LineModel, shortestWaitPs: number, override: GridOverride = {}): GridResult => {
  const { reach, bare, width } = scalesOf(model)
  const gam = homogeneousRate(model)
  const refused = withoutDecay(MAP, model, ['zeroPhononFwhmMeV'])
  if (decayWindow(bare, MAP.cutFraction, gam) === Infinity) return refused
  const window = Math.max(
    decayWindow(withEnsemble(bare, model), MAP.cutFraction, gam),
    decayWindow(echoDecay(model, bare.times, shortestWaitPs), MAP.cutFraction, 2 * gam),
  )
  if (window === Infinity) return refused
  return chosen({
    rules: MAP,
    model,
    window,
    reach: reach(MAP.lostMass),
    shown: reach(MAP.shownMass) + 6 * width,
    width,
    override: {
      stepPs: override.mapTimeStepPs,
      samples: override.mapSamples,
      stepField: 'mapTimeStepPs',
      samplesField: 'mapSamples',
    },
  })
}
