import { laserIntensity, weightAlong, weightMap } from './laser'
import type { SpectralGrid } from './grid'
import { correctedMap } from './map-kernel'
import { centreLineSlope, ellipticity } from './map-measured'
import { mapTables } from './map-tables'
import { curveQuantities, sliceWidth } from './measured'
import { modelQuantities, stokesShifts } from './model-quantities'
import type { RunCollector } from './run-collector'
import { assertFinite, RunInterruption } from './run-types'
import { workOf } from './run-work'
import { selfCheck, SELF_CHECK_TOLERANCE } from './self-check'
import { absorptiveOf, mapSlices } from './slices'
import { binEnergies, broadeningAtTimes, broadeningForWait, linearOnGrid, mapBins, sliceBins } from './stages'
import type { ComplexSeries, LineModel } from './types'

const magnitudeOf = ({ re, im }: ComplexSeries): Float64Array => re.map((value, i) => Math.hypot(value, im[i]!))

/** Absorption and emission of one temperature with their measured quantities. */
export const runLinear = (collector: RunCollector, model: LineModel, grid: SpectralGrid, t: number): void => {
  collector.poll()
  const { spectra, broadeningError } = linearOnGrid(model, grid)
  collector.broadeningError = Math.max(collector.broadeningError, broadeningError)
  const { energiesMeV, absorption, emission } = spectra
  collector.notes.push(
    `Lines at ${model.temperatureK} K: the signal has fallen to ${spectra.signalAtEnd.toExponential(1)} at the end of the window; ` +
      `the wings that sampling folds back, ${spectra.foldedShare.toExponential(1)} of the maximum, are taken off.`,
  )
  collector.add(`linear/${t}/energies`, 'meV', energiesMeV)
  collector.add(`absorption/${t}`, '1/meV', absorption)
  collector.add(`emission/${t}`, '1/meV', emission)
  const up = { energiesMeV, values: absorption }
  const down = { energiesMeV, values: emission }
  collector.measure(t, null, 'model', modelQuantities(model))
  collector.measure(t, null, 'absorption', curveQuantities(up, '1/meV'))
  collector.measure(t, null, 'emission', curveQuantities(down, '1/meV'))
  collector.measure(t, null, 'absorptionAndEmission', stokesShifts(model, up, down))
  collector.advance(workOf(grid, 'linear'))
}

const shifted = (offsets: Float64Array, centre: number): Float64Array => offsets.map((offset) => centre + offset)

const LASER_NOTE =
  'Maps and slices are weighted with the laser spectrum I(E1) I(E3), local oscillator included; absorption and emission are not.'

/** Maps and slices of one temperature at all waiting times. */
export const runMaps = (
  collector: RunCollector,
  model: LineModel,
  grid: SpectralGrid,
  waitingTimesPs: readonly number[],
  t: number,
): void => {
  const centre = model.zeroPhononEnergyMeV
  const bins = mapBins(grid)
  const fine = sliceBins(grid)
  const energies = shifted(binEnergies(bins, grid.spanMeV), centre)
  const along = shifted(binEnergies(fine.along, grid.spanMeV), centre)
  const halfShifts = binEnergies(fine.across, grid.spanMeV)
  const shifts = halfShifts.map((offset) => 2 * offset)
  const lasers = {
    map: laserIntensity(model.laser, energies),
    along: laserIntensity(model.laser, along),
    below: laserIntensity(
      model.laser,
      halfShifts.map((offset) => centre - offset),
    ),
    above: laserIntensity(model.laser, shifted(halfShifts, centre)),
  }
  const side = energies.length
  collector.add(`map/${t}/energies1`, 'meV', energies)
  collector.add(`map/${t}/energies3`, 'meV', energies)
  const atTimes = broadeningAtTimes(model, grid, waitingTimesPs.includes(0))
  collector.poll()
  checkKernel(collector, model, grid, waitingTimesPs[0]!)
  if (model.laser && t === 0) collector.notes.push(LASER_NOTE)

  waitingTimesPs.forEach((waitingTimePs, w) => {
    const broadening = broadeningForWait(model, grid, waitingTimePs, atTimes)
    collector.broadeningError = Math.max(collector.broadeningError, broadening.errorEstimate)
    assertFinite(`line broadening of map ${t}/${w}`, broadening.atWait.re, broadening.atWait.im)
    const tables = mapTables(model, waitingTimePs, grid.timeStepPs, broadening)
    collector.poll()

    const rephasing = correctedMap(tables.rephasing, bins, collector.shouldStop)
    collector.poll()
    const nonRephasing = correctedMap(tables.nonRephasing, bins, collector.shouldStop)
    collector.poll()
    weightMap([rephasing.re, rephasing.im, nonRephasing.re, nonRephasing.im], lasers.map)
    const absorptive = absorptiveOf(rephasing, nonRephasing)
    collector.addComplexMap(`map/${t}/${w}/rephasing`, 'ps²', side, rephasing)
    collector.addComplexMap(`map/${t}/${w}/nonRephasing`, 'ps²', side, nonRephasing)
    collector.addMap(`map/${t}/${w}/absorptive`, 'ps²', side, absorptive)

    const { crossDiagonal, diagonal, method } = mapSlices(tables, fine)
    const parts = ({ re, im }: ComplexSeries) => [re, im]
    weightAlong([...parts(crossDiagonal.rephasing), ...parts(crossDiagonal.nonRephasing)], lasers.below, lasers.above)
    weightAlong([...parts(diagonal.rephasing), ...parts(diagonal.nonRephasing)], lasers.along, lasers.along)
    const across = absorptiveOf(crossDiagonal.rephasing, crossDiagonal.nonRephasing)
    const onDiagonal = absorptiveOf(diagonal.rephasing, diagonal.nonRephasing)
    collector.add(`crossDiagonal/${t}/${w}/shifts`, 'meV', shifts)
    collector.addComplex(`crossDiagonal/${t}/${w}/rephasing`, 'ps²', crossDiagonal.rephasing)
    collector.addComplex(`crossDiagonal/${t}/${w}/nonRephasing`, 'ps²', crossDiagonal.nonRephasing)
    collector.add(`crossDiagonal/${t}/${w}/absorptive`, 'ps²', across)
    collector.add(`diagonal/${t}/${w}/energies`, 'meV', along)
    collector.addComplex(`diagonal/${t}/${w}/rephasing`, 'ps²', diagonal.rephasing)
    collector.addComplex(`diagonal/${t}/${w}/nonRephasing`, 'ps²', diagonal.nonRephasing)
    collector.add(`diagonal/${t}/${w}/absorptive`, 'ps²', onDiagonal)

    const widthAcross = (key: string, name: string, values: Float64Array) =>
      sliceWidth(key, name, { energiesMeV: shifts, values })
    const widthAlong = (key: string, name: string, values: Float64Array) =>
      sliceWidth(key, name, { energiesMeV: along, values })
    const acrossAbsorptive = widthAcross(
      'crossDiagonalFwhmAbsorptive',
      'cross-diagonal width in x = E3 - E1, absorptive',
      across,
    )
    const alongAbsorptive = widthAlong('diagonalFwhmAbsorptive', 'diagonal width in E, absorptive', onDiagonal)
    collector.measure(t, w, 'map', [
      widthAcross(
        'crossDiagonalFwhm',
        'cross-diagonal width in x = E3 - E1, rephasing magnitude',
        magnitudeOf(crossDiagonal.rephasing),
      ),
      acrossAbsorptive,
      widthAlong('diagonalFwhm', 'diagonal width in E, rephasing magnitude', magnitudeOf(diagonal.rephasing)),
      alongAbsorptive,
      centreLineSlope(absorptive, energies),
      ellipticity(alongAbsorptive, acrossAbsorptive),
    ])
    collector.notes.push(
      mapNote(model, waitingTimePs, rephasing.discretisationError),
      sliceNote(model, waitingTimePs, method),
    )
    collector.advance(workOf(grid, 'map'))
  })
}

const mapNote = (model: LineModel, waitingTimePs: number, error: number | null): string => {
  const place = `Maps at ${model.temperatureK} K, ${waitingTimePs} ps: `
  return error === null
    ? `${place}summed from logarithms, because the coupling is strong; second order in the time step, without an end correction.`
    : `${place}estimated discretisation error ${error.toExponential(1)} of the maximum, window and span aside (3e-5 and 1e-5 by choice).`
}

const sliceNote = (
  model: LineModel,
  waitingTimePs: number,
  { method, reductionError, band }: ReturnType<typeof mapSlices>['method'],
): string => {
  const place = `Cross-diagonal slice at ${model.temperatureK} K, ${waitingTimePs} ps: `
  const estimate =
    reductionError === null
      ? ''
      : ` (one-dimensional reduction: estimated error ${reductionError.toExponential(1)} of the maximum)`
  return method === 'reduction'
    ? `${place}strongly inhomogeneous reduction${estimate}.`
    : `${place}summed over ${band} samples of t3 - t1${estimate}.`
}

/** The kernel of this thread against the plain sum, once a temperature: a wrong kernel must not fill a store. */
const checkKernel = (collector: RunCollector, model: LineModel, grid: SpectralGrid, waitingTimePs: number): void => {
  const deviation = selfCheck(model, grid, waitingTimePs)
  collector.notes.push(
    `Self-check at ${model.temperatureK} K: fast kernel and plain sum agree to ${deviation.toExponential(1)} of the maximum.`,
  )
  if (deviation <= SELF_CHECK_TOLERANCE) return
  throw new RunInterruption({
    ok: false,
    code: 'engine/self-check',
    message: `self-check of the map kernel at ${model.temperatureK} K: expected agreement to ${SELF_CHECK_TOLERANCE}; found ${deviation}`,
    issues: [],
  })
}
