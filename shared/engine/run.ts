/**
 * Entry points of a run: what it would need (`estimateRun`) and its computation (`computeRun`).
 *
 * Array keys, T and W being indices into the set's lists: `spectralDensity/{energies,values}`, `linear/T/energies`,
 * `absorption/T`, `emission/T`, `map/T/{energies1,energies3}`, `map/T/W/{rephasing,nonRephasing,absorptive}`,
 * `crossDiagonal/T/W/{shifts,rephasing,nonRephasing,absorptive}`, `diagonal/T/W/{energies,rephasing,nonRephasing,absorptive}`.
 *
 * Lines and slices are stored in double precision. Maps are stored in single precision, enough for a picture (6e-8 of the
 * maximum), under the SHA-256 of their double-precision little-endian bytes, so that a recomputation can be compared.
 */
import type { Issue } from '../errors/app-error'
import type { ParameterSet } from '../schemas/parameter-set'
import type { GridDescription } from '../schemas/run'
import { ENGINE_VERSION } from './engine-version'
import { chooseLinearGrid, chooseMapGrid, type GridResult, type Refusal, type SpectralGrid } from './grid'
import { modelAt } from './model'
import { modelWarnings } from './model-warnings'
import { RunCollector } from './run-collector'
import { runLinear, runMaps } from './run-stages'
import { RunInterruption, type RunAnswer, type RunFailure } from './run-types'
import { workOf } from './run-work'
import { sliceBins, spectralDensityCurve } from './stages'
import type { LineModel, WorkHooks } from './types'

export type { RunAnswer, RunArray, RunFailure } from './run-types'

export interface RunEstimate {
  /** One grid a temperature; empty when refused. */
  linearGrid: GridDescription[]
  mapGrid: GridDescription[]
  /** Bytes of all arrays. */
  bytes: number
  refusal?: { code: Refusal['code']; message: string; issues: Issue[] }
}

interface Plan {
  model: LineModel
  linear: SpectralGrid
  map: SpectralGrid
}

const FLOAT64 = 8

const mapPoints = (grid: SpectralGrid): number => (2 * grid.halfBins) ** 2

const bytesOf = ({ linear, map }: Plan, waits: number): number => {
  const { across, along } = sliceBins(map)
  const lines = 3 * 2 * linear.halfBins * FLOAT64
  const maps = mapPoints(map) * (8 + 8 + 4) + 12 * (across.halfBins + along.halfBins) * FLOAT64
  return lines + 4 * map.halfBins * FLOAT64 + waits * maps
}

const planOf = (set: ParameterSet): { plans: Plan[] } | { refusal: Refusal } => {
  const shortest = Math.min(...set.waitingTimesPs)
  const plans: Plan[] = []
  for (const temperature of set.temperaturesK) {
    const model = modelAt(set, temperature)
    const linear: GridResult = chooseLinearGrid(model, set.grid)
    if (!linear.ok) return { refusal: linear }
    const map: GridResult = chooseMapGrid(model, shortest, set.grid)
    if (!map.ok) return { refusal: map }
    plans.push({ model, linear: linear.grid, map: map.grid })
  }
  return { plans }
}

const sentenceOf = ({ issues }: Refusal): string => issues.map(({ message }) => message).join('; ')

/** What a run of this set would take, or why it is refused. Cheap: no spectrum is computed. */
export const estimateRun = (set: ParameterSet): RunEstimate => {
  const planned = planOf(set)
  if ('refusal' in planned) {
    const { refusal } = planned
    return {
      linearGrid: [],
      mapGrid: [],
      bytes: 0,
      refusal: { code: refusal.code, message: sentenceOf(refusal), issues: refusal.issues },
    }
  }
  const { plans } = planned
  return {
    linearGrid: plans.map(({ linear }) => linear),
    mapGrid: plans.map(({ map }) => map),
    bytes: plans.reduce((sum, plan) => sum + bytesOf(plan, set.waitingTimesPs.length), 0),
  }
}

const described = ({ timeStepPs, samples, paddedSamples, energyStepMeV, spanMeV, reason }: SpectralGrid) => ({
  timeStepPs,
  samples,
  paddedSamples,
  energyStepMeV,
  spanMeV,
  reason,
})

/** Computes everything of a set. Never throws for bad numbers: failures are answers with a code and a sentence. */
export const computeRun = (set: ParameterSet, hooks: WorkHooks = {}): RunAnswer => {
  const planned = planOf(set)
  if ('refusal' in planned) {
    const { refusal } = planned
    return { ok: false, code: refusal.code, message: sentenceOf(refusal), issues: refusal.issues }
  }
  const { plans } = planned
  const waits = set.waitingTimesPs
  const collector = new RunCollector(
    hooks,
    plans.reduce((sum, { linear, map }) => sum + workOf(linear, 'linear') + waits.length * workOf(map, 'map'), 0),
  )
  try {
    const density = spectralDensityCurve(set.bath, set.modes)
    collector.add('spectralDensity/energies', 'meV', density.energiesMeV)
    collector.add('spectralDensity/values', 'meV', density.densityMeV)
    plans.forEach(({ model, linear, map }, temperatureIndex) => {
      runLinear(collector, model, linear, temperatureIndex)
      runMaps(collector, model, map, waits, temperatureIndex)
    })
  } catch (error) {
    if (error instanceof RunInterruption) return error.failure satisfies RunFailure
    throw error
  }
  const grids = plans.flatMap(({ linear, map }) => [...linear.warnings, ...map.warnings])
  return {
    ok: true,
    summary: {
      engineVersion: ENGINE_VERSION,
      temperaturesK: [...set.temperaturesK],
      waitingTimesPs: [...waits],
      linearGrid: plans.map(({ linear }) => described(linear)),
      mapGrid: plans.map(({ map }) => described(map)),
      warnings: [...new Set([...modelWarnings(set), ...grids])],
      notes: collector.notes,
      quantities: collector.quantities,
      broadeningError: collector.broadeningError,
      arrays: collector.descriptions,
    },
    arrays: collector.arrays,
  }
}
