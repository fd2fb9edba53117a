/**
 * Everything that a page draws while a person types, from the same functions and grids as a run: the numbers are those
 * that a worker stores. Meant for a web worker; about 5 ms for an ordinary set.
 */
import type { Issue } from '../errors/app-error'
import type { ParameterSet } from '../schemas/parameter-set'
import type { GridDescription } from '../schemas/run'
import { chooseMapGrid, type SpectralGrid } from './grid'
import { laserIntensity, weightAlong } from './laser'
import { mapTables } from './map-tables'
import { modelAt } from './model'
import { modelWarnings } from './model-warnings'
import { rephasingCrossDiagonal, type SliceMethod } from './slices'
import {
  binEnergies,
  broadeningAtTimes,
  broadeningForWait,
  linearStage,
  sliceBins,
  spectralDensityCurve,
  type SpectralDensityCurve,
} from './stages'
import type { LineModel } from './types'

export interface PreviewCurve {
  energiesMeV: Float64Array
  perMeV: Float64Array
}

export interface PreviewSlice {
  /** x = E3 - E1, meV. */
  shiftsMeV: Float64Array
  re: Float64Array
  im: Float64Array
  magnitude: Float64Array
  method: SliceMethod
}

export interface Preview {
  spectralDensity: SpectralDensityCurve
  /** null where the model allows no such curve; `issues` says why. */
  absorption: PreviewCurve | null
  emission: PreviewCurve | null
  /** Rephasing, through (E0, E0), ps^2. */
  crossDiagonal: PreviewSlice | null
  /** Largest error estimate of g0, relative to max(1, |g0|). */
  broadeningError: number
  warnings: string[]
  issues: Issue[]
  grids: { linear: GridDescription | null; map: GridDescription | null }
}

/** Rephasing cross-diagonal slice of one waiting time, with the laser's weight. */
export const previewSlice = (
  model: LineModel,
  grid: SpectralGrid,
  waitingTimePs: number,
): { slice: PreviewSlice; broadeningError: number } => {
  const broadening = broadeningForWait(model, grid, waitingTimePs, broadeningAtTimes(model, grid, waitingTimePs === 0))
  const tables = mapTables(model, waitingTimePs, grid.timeStepPs, broadening)
  const bins = sliceBins(grid).across
  const { slice, method } = rephasingCrossDiagonal(tables.rephasing, bins)
  const offsets = binEnergies(bins, grid.spanMeV)
  const centre = model.zeroPhononEnergyMeV
  weightAlong(
    [slice.re, slice.im],
    laserIntensity(
      model.laser,
      offsets.map((offset) => centre - offset),
    ),
    laserIntensity(
      model.laser,
      offsets.map((offset) => centre + offset),
    ),
  )
  return {
    slice: {
      shiftsMeV: offsets.map((offset) => 2 * offset),
      re: slice.re,
      im: slice.im,
      magnitude: slice.re.map((value, i) => Math.hypot(value, slice.im[i]!)),
      method,
    },
    broadeningError: broadening.errorEstimate,
  }
}

export const computePreview = (set: ParameterSet, temperatureK: number, waitingTimePs: number): Preview => {
  const model = modelAt(set, temperatureK)
  const preview: Preview = {
    spectralDensity: spectralDensityCurve(set.bath, set.modes),
    absorption: null,
    emission: null,
    crossDiagonal: null,
    broadeningError: 0,
    warnings: modelWarnings(set),
    issues: [],
    grids: { linear: null, map: null },
  }
  const linear = linearStage(model, set.grid)
  if (linear.ok) {
    const { energiesMeV, absorption, emission } = linear.spectra
    preview.absorption = { energiesMeV, perMeV: absorption }
    preview.emission = { energiesMeV, perMeV: emission }
    preview.grids.linear = linear.grid
    preview.warnings.push(...linear.grid.warnings)
    preview.broadeningError = linear.broadeningError
  } else {
    preview.issues.push(...linear.issues)
  }
  const choice = chooseMapGrid(model, Math.min(waitingTimePs, ...set.waitingTimesPs), set.grid)
  if (choice.ok) {
    const { slice, broadeningError } = previewSlice(model, choice.grid, waitingTimePs)
    preview.crossDiagonal = slice
    preview.grids.map = choice.grid
    preview.warnings.push(...choice.grid.warnings)
    preview.broadeningError = Math.max(preview.broadeningError, broadeningError)
  } else {
    preview.issues.push(...choice.issues)
  }
  return preview
}
