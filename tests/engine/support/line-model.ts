import type { LineModel } from '../../../shared/engine/types'
import { lineBroadeningAt } from '../../../shared/engine/line-broadening'
import { mapTables } from '../../../shared/engine/map-tables'
import reference from '../reference/spectra.json'

/** A bare line at 2000 meV of 0.5 meV width unless said otherwise. */
export const lineModel = (changes: Partial<LineModel> = {}): LineModel => ({
  bath: [],
  modes: [],
  zeroPhononEnergyMeV: 2000,
  temperatureK: 4,
  zeroPhononFwhmMeV: 0.5,
  ensembleFwhmMeV: 0,
  populationLifetimePs: Infinity,
  ...changes,
})

/** Two power-law terms and three modes, an ensemble: the set that the yardstick script computes. */
export const richModel = (changes: Partial<LineModel> = {}): LineModel =>
  lineModel({
    bath: [1, 3].map((exponent, k) => ({
      kind: 'powerLaw',
      couplingStrength: [0.05, 0.5][k]!,
      exponent,
      cutoffEnergyMeV: 2,
      cutoffShape: 'gaussian',
    })),
    modes: [
      { label: '', energyMeV: 4, huangRhys: 0.4 },
      { label: '', energyMeV: 12, huangRhys: 0.25 },
      { label: '', energyMeV: 26, huangRhys: 0.15 },
    ],
    ensembleFwhmMeV: 3,
    ...changes,
  })

export const tablesFor = (model: LineModel, waitingTimePs: number, stepPs: number, samples: number) => {
  const at = (count: number, from: number) =>
    lineBroadeningAt(
      model,
      model.temperatureK,
      Float64Array.from({ length: count }, (_, j) => from + j * stepPs),
    )
  return mapTables(model, waitingTimePs, stepPs, {
    atTimes: at(samples, 0),
    atWait: at(2 * samples - 1, waitingTimePs),
  })
}

type Case = (typeof reference.cases)[number]

/** Parameters of a reference case as a model; fields left out are 0 or empty. */
export const modelOf = (parameters: Case['parameters']): LineModel => {
  const given = parameters as Partial<LineModel>
  return lineModel({
    ...given,
    bath: given.bath ?? [],
    modes: given.modes ?? [],
    zeroPhononEnergyMeV: given.zeroPhononEnergyMeV ?? 0,
    ensembleFwhmMeV: given.ensembleFwhmMeV ?? 0,
  })
}

/** Reference cases of one quantity, as [id, case]. */
export const referenceCases = (quantity: string): [string, Case][] => {
  const found = reference.cases.filter((entry) => entry.quantity === quantity)
  if (found.length === 0) throw new Error(`no reference case of ${quantity}`)
  return found.map((entry) => [entry.id, entry])
}
