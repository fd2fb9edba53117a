/**
 * Quantities that follow from a model without its spectra: weights, reorganisation energy, moments, and the Stokes shift
 * between the two curves. Sources: those of `bath-integrals.ts`.
 */
import type { MeasuredQuantity } from '../schemas/run'
import { moments, zeroPhononWeight } from './bath-integrals'
import { isMissing, peakOf, quantityOf, type Curve } from './measured'
import type { LineModel } from './types'

const DIVERGES = 'the integral diverges for this spectral density'

export const modelQuantities = (model: LineModel): MeasuredQuantity[] => {
  const weight = zeroPhononWeight(model, model.temperatureK)
  const closed = moments(model, model.temperatureK, model.ensembleFwhmMeV)
  return [
    quantityOf('zeroPhononWeight', 'zero-phonon weight', '1', weight.weight, weight.reason),
    quantityOf('debyeWallerFactor', 'Debye-Waller factor', '1', weight.debyeWallerFactor, weight.reason),
    quantityOf(
      'thermalWidth',
      'thermal width of the line centre',
      'meV',
      weight.thermalWidthMeV,
      weight.weight === null ? weight.reason : 'the zero-phonon line keeps a finite weight',
    ),
    quantityOf('zeroPhononFwhm', 'homogeneous zero-phonon width', 'meV', model.zeroPhononFwhmMeV),
    quantityOf('reorganizationEnergy', 'reorganisation energy', 'meV', closed.reorganizationEnergyMeV),
    quantityOf('modelFirstMoment', 'first moment about E0 (absorption)', 'meV', closed.firstMomentAbsorptionMeV),
    quantityOf('modelVariance', 'variance without homogeneous width', 'meV²', closed.varianceMeV2, DIVERGES),
    quantityOf(
      'modelThirdMoment',
      'third central moment (absorption)',
      'meV³',
      closed.thirdCentralMomentAbsorptionMeV3,
      DIVERGES,
    ),
  ]
}

/** Absorption minus emission: of the peaks, and of the first moments (twice the reorganisation energy). */
export const stokesShifts = (model: LineModel, absorption: Curve, emission: Curve): MeasuredQuantity[] => {
  const up = peakOf(absorption)
  const down = peakOf(emission)
  const { firstMomentAbsorptionMeV, firstMomentFluorescenceMeV } = moments(model, model.temperatureK)
  const name = 'Stokes shift of the peaks'
  return [
    isMissing(up) || isMissing(down)
      ? quantityOf(
          'stokesShiftPeak',
          name,
          'meV',
          null,
          isMissing(up) ? up.reason : (down as { reason: string }).reason,
        )
      : quantityOf('stokesShiftPeak', name, 'meV', up.energyMeV - down.energyMeV),
    quantityOf(
      'stokesShiftMoment',
      'Stokes shift of the first moments',
      'meV',
      firstMomentAbsorptionMeV - firstMomentFluorescenceMeV,
    ),
  ]
}
