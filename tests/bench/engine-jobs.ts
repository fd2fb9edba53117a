/**
 * The engine's side of the benchmark: the same physics, grids and outputs as tests/bench/numpy_baseline.py. As there, the
 * table of g0 exists before a linear or a map job starts; everything else, tables of a map included, is timed.
 */
import { lineBroadening } from '../../shared/engine/line-broadening'
import { linearSignal, realSpectrum } from '../../shared/engine/linear'
import { HBAR_MEV_PS } from '../../shared/engine/constants'
import { absorptiveMap, signalMap } from '../../shared/engine/map-kernel'
import { plainMaps } from '../../shared/engine/map'
import { mapTables } from '../../shared/engine/map-tables'
import { computePreview } from '../../shared/engine/preview'
import type { LineModel } from '../../shared/engine/types'
import { ParameterSetSchema, type ParameterSet } from '../../shared/schemas/parameter-set'

export interface Job {
  name: string
  /** Name of the yardstick's job and of its arrays, where it has one. */
  yardstick?: { job: string; arrays: string[] }
  run: () => Float64Array[]
}

const parameters: ParameterSet = ParameterSetSchema.parse({
  zeroPhononEnergyMeV: 2000,
  zeroPhononFwhmMeV: 0.5,
  ensembleFwhmMeV: 3,
  bath: [
    { kind: 'powerLaw', couplingStrength: 0.05, exponent: 1, cutoffEnergyMeV: 2, cutoffShape: 'gaussian' },
    { kind: 'powerLaw', couplingStrength: 0.5, exponent: 3, cutoffEnergyMeV: 2, cutoffShape: 'gaussian' },
  ],
  modes: [
    { energyMeV: 4, huangRhys: 0.4 },
    { energyMeV: 12, huangRhys: 0.25 },
    { energyMeV: 26, huangRhys: 0.15 },
  ],
  temperaturesK: [4],
  waitingTimesPs: [1.28],
})

const model: LineModel = {
  bath: parameters.bath,
  modes: parameters.modes,
  zeroPhononEnergyMeV: 2000,
  temperatureK: 4,
  zeroPhononFwhmMeV: 0.5,
  ensembleFwhmMeV: 3,
  populationLifetimePs: Infinity,
}

const linearJob = (samples: number, stepPs: number): Job => {
  const broadening = lineBroadening(model, 4, { stepPs, samples })
  const scale = stepPs / (Math.PI * HBAR_MEV_PS)
  const half = samples / 2
  return {
    name: `absorption and emission, ${samples} points`,
    yardstick: { job: `linear-${samples}`, arrays: ['absorptionPerMeV', 'fluorescencePerMeV'] },
    run: () => {
      const spectrum = realSpectrum(linearSignal(model, broadening, stepPs), samples)
      const absorption = new Float64Array(samples)
      const emission = new Float64Array(samples)
      for (let i = 0; i < samples; i++) {
        const place = (i + half) % samples
        absorption[i] = scale * spectrum[place]!
        emission[i] = scale * spectrum[(samples - place) % samples]!
      }
      return [absorption, emission]
    },
  }
}

const WINDOW_PS = 20.48

const mapSetting = (samples: number) => {
  const stepPs = WINDOW_PS / samples
  const wait = Math.round(1.28 / stepPs)
  const { re, im } = lineBroadening(model, 4, { stepPs, samples: 2 * samples - 1 + wait })
  const part = (from: number, to: number) => ({ re: re.slice(from, to), im: im.slice(from, to) })
  const broadening = { atTimes: part(0, samples), atWait: part(wait, wait + 2 * samples - 1) }
  return {
    tables: () => mapTables(model, wait * stepPs, stepPs, broadening),
    bins: { padded: samples, halfBins: samples / 2, stride: 1 },
  }
}

const mapJob = (samples: number): Job => {
  const { tables, bins } = mapSetting(samples)
  const into = new Float64Array(samples * samples)
  return {
    name: `absorptive map, ${samples} x ${samples}, tables included`,
    yardstick: { job: `map-${samples}`, arrays: ['absorptivePs2'] },
    run: () => [absorptiveMap(tables(), bins, into)],
  }
}

const complexJob = (samples: number): Job => {
  const { tables, bins } = mapSetting(samples)
  return {
    name: `rephasing and non-rephasing maps, ${samples} x ${samples}`,
    run: () => {
      const both = tables()
      const [r, s] = [signalMap(both.rephasing, bins), signalMap(both.nonRephasing, bins)]
      return [r.re, r.im, s.re, s.im]
    },
  }
}

/** Without the compiled kernel: what a host without WebAssembly would see. */
const plainJob = (samples: number): Job => {
  const { tables, bins } = mapSetting(samples)
  return {
    name: `the same maps by the plain kernel, ${samples} x ${samples}`,
    run: () => {
      const { rephasing, nonRephasing } = plainMaps(tables(), bins)
      return [rephasing.re, rephasing.im, nonRephasing.re, nonRephasing.im]
    },
  }
}

const previewJob: Job = {
  name: 'preview: all curves of the parameter page',
  run: () => {
    const { spectralDensity, absorption, emission, crossDiagonal } = computePreview(parameters, 4, 1.28)
    return [spectralDensity.densityMeV, absorption!.perMeV, emission!.perMeV, crossDiagonal!.magnitude]
  },
}

export const jobs: Job[] = [
  previewJob,
  linearJob(8192, 0.01),
  mapJob(256),
  mapJob(512),
  mapJob(1024),
  complexJob(512),
  plainJob(512),
]
