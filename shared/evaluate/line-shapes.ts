/** Answers of the command line about one-dimensional quantities. Names and shapes of the values are those of the requests' documentation. */
import type { RequestOf } from '../schemas/engine-request'
import { huangRhysLineWeights, moments, reorganizationEnergyMeV, zeroPhononWeight } from '../engine/bath-integrals'
import { lineBroadeningAt } from '../engine/line-broadening'
import { linearSampled } from '../engine/linear'
import { absorptionAt, absorptionFwhm, emissionAt } from '../engine/linear-at'
import { spectralDensity } from '../engine/spectral-density'
import { thirdOrderPathways } from '../engine/third-order'
import type { ComplexSeries, LineModel } from '../engine/types'
import { EngineRefusal, type Answer } from './answer'

type LineParameters = RequestOf<'absorption'>['parameters']

export const toModel = ({ populationLifetimePs, ...parameters }: LineParameters): LineModel => ({
  ...parameters,
  populationLifetimePs: populationLifetimePs ?? Infinity,
})

export const split = ({ re, im }: ComplexSeries) => ({ real: [...re], imag: [...im] })

export const answerLineBroadening = ({ parameters, samples }: RequestOf<'lineBroadeningG0'>): Answer => {
  const found = lineBroadeningAt(parameters, parameters.temperatureK, Float64Array.from(samples.points))
  return {
    values: { unit: '1', ...split(found) },
    diagnostics: { errorEstimate: found.errorEstimate, method: found.method },
  }
}

export const answerSpectralDensity = ({ parameters, samples }: RequestOf<'spectralDensity'>): Answer => ({
  values: { unit: 'meV', density: [...spectralDensity(parameters.bath, Float64Array.from(samples.points))] },
})

/** Height and place of the peak; left out where the line has no width at half maximum to search between. */
const peakOfLine = (model: LineModel, mirrored: boolean) => {
  try {
    const { peakEnergyMeV, peakPerMeV } = absorptionFwhm(model)
    return { peak: peakPerMeV, peakEnergyMeV: mirrored ? 2 * model.zeroPhononEnergyMeV - peakEnergyMeV : peakEnergyMeV }
  } catch (error) {
    if (error instanceof RangeError) return {}
    throw error
  }
}

export const answerAbsorption = ({ parameters, samples }: RequestOf<'absorption'>): Answer => {
  const model = toModel(parameters)
  const absorption = [...absorptionAt(model, Float64Array.from(samples.points))]
  return { values: { unit: '1/meV', absorption, ...peakOfLine(model, false) } }
}

export const answerFluorescence = ({ parameters, samples }: RequestOf<'fluorescence'>): Answer => {
  const model = toModel(parameters)
  const fluorescence = [...emissionAt(model, Float64Array.from(samples.points))]
  return { values: { unit: '1/meV', fluorescence, ...peakOfLine(model, true) } }
}

export const answerAbsorptionFwhm = ({ parameters }: RequestOf<'absorptionFwhm'>): Answer => {
  const { fwhmMeV, leftMeV, rightMeV, peakEnergyMeV, peakPerMeV } = absorptionFwhm(toModel(parameters))
  return { values: { fwhmMeV, leftMeV, rightMeV, peakEnergyMeV, peakPerMeV } }
}

export const answerLinearSampled = ({ parameters, samples }: RequestOf<'linearSampled'>): Answer => {
  const { samples: count, timeStepPs, ...rest } = parameters
  const model = toModel(rest)
  const broadening = lineBroadeningAt(
    model,
    model.temperatureK,
    Float64Array.from({ length: count }, (_, j) => j * timeStepPs),
  )
  const at = (bins: readonly number[]) => linearSampled(model, timeStepPs, broadening, bins)
  const { absorption, emission } = at(samples.points)
  // The peak on the grid: the whole spectrum costs count^2, so it is asked for only where that is quick.
  const peak =
    count <= 4096
      ? Math.max(...at(Array.from({ length: count }, (_, m) => m - Math.floor(count / 2))).absorption)
      : null
  return {
    values: {
      unit: '1/meV',
      absorption: [...absorption],
      fluorescence: [...emission],
      ...(peak === null ? {} : { absorptionPeakOnGrid: peak }),
    },
  }
}

export const answerHuangRhys = ({ parameters, samples }: RequestOf<'huangRhysLineWeights'>): Answer => ({
  values: {
    unit: '1',
    weight: [...huangRhysLineWeights(parameters.modes[0]!, parameters.temperatureK, samples.points)],
  },
})

export const answerZeroPhononWeight = ({ parameters }: RequestOf<'zeroPhononWeight'>): Answer => {
  const { weight, debyeWallerFactor, exponentOfContinuousBath, thermalWidthMeV, reason } = zeroPhononWeight(
    parameters,
    parameters.temperatureK,
  )
  if (weight === null) {
    const width =
      thermalWidthMeV === null ? '' : `; the centre of the line has a thermal width of ${thermalWidthMeV} meV`
    throw new EngineRefusal('parameters.bath', `${reason}${width}`)
  }
  return { values: { unit: '1', weight, debyeWallerFactor, exponentOfContinuousBath } }
}

export const answerMoments = ({ parameters }: RequestOf<'moments'>): Answer => ({
  values: { ...moments(parameters, parameters.temperatureK, parameters.ensembleFwhmMeV) },
})

export const answerReorganization = ({ parameters }: RequestOf<'reorganizationEnergy'>): Answer => ({
  values: { reorganizationEnergyMeV: reorganizationEnergyMeV(parameters) },
})

export const answerPathways = ({ parameters, samples }: RequestOf<'thirdOrderPathways'>): Answer => {
  const { r1, r2, r3, r4 } = thirdOrderPathways(toModel(parameters), samples.points)
  return { values: { unit: '1', R1: split(r1), R2: split(r2), R3: split(r3), R4: split(r4) } }
}
