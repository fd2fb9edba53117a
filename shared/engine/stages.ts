/**
 * The stages that the preview in the page and the run in a worker share, so that both give the same numbers: spectral
 * density for display, linear spectra of one temperature, time tables and slices of one waiting time.
 */
import type { BathTerm, GridOverride, Mode } from '../schemas/parameter-set'
import { moments } from './bath-integrals'
import { toContinuum } from './bath/registry'
import { HBAR_MEV_PS } from './constants'
import { nextPowerOfTwo } from './fft'
import { chooseLinearGrid, type Refusal, type SpectralGrid } from './grid'
import { lineBroadening, lineBroadeningAt } from './line-broadening'
import { linearSpectra, type LinearSpectra } from './linear'
import type { MapBins } from './map'
import type { MapBroadening } from './map-tables'
import type { SliceBins } from './slices'
import { spectralDensity } from './spectral-density'
import type { LineBroadening, LineModel } from './types'

const DENSITY_POINTS = 401
/** The curve is drawn to where it has fallen to this share of its largest value. */
const DENSITY_SHOWN = 1e-4

export interface SpectralDensityCurve {
  energiesMeV: Float64Array
  densityMeV: Float64Array
}

/** hbar J on 401 points from 0 to where bath and modes end. */
export const spectralDensityCurve = (bath: readonly BathTerm[], modes: readonly Mode[]): SpectralDensityCurve => {
  const upper = bath.reduce((most, term) => Math.max(most, toContinuum(term).reach * HBAR_MEV_PS), 0)
  const axis = (top: number) =>
    Float64Array.from({ length: DENSITY_POINTS }, (_, i) => (i * top) / (DENSITY_POINTS - 1))
  let shown = modes.reduce((most, mode) => Math.max(most, mode.energyMeV * 1.1), 0)
  if (upper > 0) {
    const energies = axis(upper)
    const density = spectralDensity(bath, energies)
    const floor = DENSITY_SHOWN * density.reduce((a, b) => Math.max(a, b), 0)
    const last = density.findLastIndex((value) => value > floor)
    shown = Math.max(shown, energies[Math.min(DENSITY_POINTS - 1, last + 1)]!)
  }
  const energiesMeV = axis(shown > 0 ? shown : 1)
  return { energiesMeV, densityMeV: spectralDensity(bath, energiesMeV) }
}

export type LinearStage = { ok: true; grid: SpectralGrid; spectra: LinearSpectra; broadeningError: number } | Refusal

export const linearOnGrid = (model: LineModel, grid: SpectralGrid): Extract<LinearStage, { ok: true }> => {
  const broadening = lineBroadening(model, model.temperatureK, { stepPs: grid.timeStepPs, samples: grid.samples })
  const closed = moments(model, model.temperatureK, model.ensembleFwhmMeV)
  const wings = {
    mean: closed.reorganizationEnergyMeV,
    variance: closed.varianceMeV2 ?? 0,
    third: closed.thirdCentralMomentAbsorptionMeV3 ?? 0,
  }
  const spectra = linearSpectra(model, grid, broadening, wings)
  return { ok: true, grid, spectra, broadeningError: broadening.errorEstimate }
}

export const linearStage = (model: LineModel, override: GridOverride | undefined): LinearStage => {
  const choice = chooseLinearGrid(model, override)
  return choice.ok ? linearOnGrid(model, choice.grid) : choice
}

/** g0 at t_j, which every waiting time of one temperature shares; twice as long when one of them is 0. */
export const broadeningAtTimes = (model: LineModel, grid: SpectralGrid, withoutWait: boolean): LineBroadening =>
  lineBroadening(model, model.temperatureK, {
    stepPs: grid.timeStepPs,
    samples: withoutWait ? 2 * grid.samples - 1 : grid.samples,
  })

/** Adds g0 at t2 + t_j. */
export const broadeningForWait = (
  model: LineModel,
  grid: SpectralGrid,
  waitingTimePs: number,
  atTimes: LineBroadening,
): MapBroadening & { errorEstimate: number } => {
  const { samples: n, timeStepPs } = grid
  const first = { re: atTimes.re.subarray(0, n), im: atTimes.im.subarray(0, n) }
  if (waitingTimePs === 0) return { atTimes: first, atWait: atTimes, errorEstimate: atTimes.errorEstimate }
  const times = Float64Array.from({ length: 2 * n - 1 }, (_, j) => waitingTimePs + j * timeStepPs)
  const atWait = lineBroadeningAt(model, model.temperatureK, times)
  return { atTimes: first, atWait, errorEstimate: Math.max(atTimes.errorEstimate, atWait.errorEstimate) }
}

/** Bins of the maps of a grid. */
export const mapBins = ({ paddedSamples, halfBins, stride }: SpectralGrid): MapBins => ({
  padded: paddedSamples,
  halfBins,
  stride,
})

/** Points of a slice at most; fewer where the padded window already resolves the lines. */
const SLICE_POINTS = 4096
const SLICE_PADDING = 16

/**
 * Finer bins for slices, which cost one dimension only: sixteen times the window, so that x = E3 - E1, which runs in
 * steps of two bins, still puts a dozen points on the narrowest line. Both run over the range of the map; every point kept.
 */
export const sliceBins = (grid: SpectralGrid): SliceBins => {
  let padded = Math.max(grid.paddedSamples, nextPowerOfTwo(SLICE_PADDING * grid.samples))
  const halfOf = (length: number) => (grid.halfBins * grid.stride * length) / grid.paddedSamples
  while (2 * halfOf(padded) > SLICE_POINTS && padded > grid.paddedSamples) padded /= 2
  const halfBins = Math.min(padded / 2, halfOf(padded))
  return { across: { padded, halfBins: halfBins / 2, stride: 1 }, along: { padded, halfBins, stride: 1 } }
}

/** E - E0 of the kept bins. */
export const binEnergies = (bins: MapBins, spanMeV: number): Float64Array =>
  Float64Array.from(
    { length: 2 * bins.halfBins },
    (_, i) => ((i - bins.halfBins) * bins.stride * spanMeV) / bins.padded,
  )
