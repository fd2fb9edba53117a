import { HC_MEV_NM } from '../../shared/engine/constants'
import { computePreview } from '../../shared/engine/preview'
import type { TableReading } from '../../shared/schemas/measurement'
import { ParameterSetSchema, type ParameterSetInput } from '../../shared/schemas/parameter-set'
import { seededNormal } from './noise'
import { sampleA1, sampleB2 } from './scenario'

/** Synthetic "measured" spectra: the engine's curves with seeded noise, written in notations that instruments use. */

type Unit = TableReading['axisUnit']
type Kind = 'absorption' | 'emission'

export interface DemoSpectrum {
  fileName: string
  name: string
  kind: Kind
  sampleName: string
  temperatureK: number
  note: string
  content: Buffer
}

interface Recipe {
  set: ParameterSetInput
  sample: string
  kind: Kind
  temperatureK: number
  seed: number
  unit: Unit
  /** Axis in `unit`: first, last, step. */
  axis: [number, number, number]
  /** Peak of the noiseless curve, constant background and standard deviation of the noise at the peak. */
  peak: number
  background: number
  noise: number
  write: (rows: Row[], header: string[]) => string
  extension: string
}

interface Row {
  axis: number
  value: number
  sigma: number
}

const MEV_PER: Record<Exclude<Unit, 'nm'>, number> = { meV: 1, eV: 1000, 'cm^-1': HC_MEV_NM * 1e-7 }

const toEnergy = (position: number, unit: Unit) => (unit === 'nm' ? HC_MEV_NM / position : position * MEV_PER[unit])

/** Linear between the engine's points, which lie far closer than the width of any line here. */
const interpolate = (x: Float64Array, y: Float64Array, at: number): number => {
  let low = 0
  let high = x.length - 1
  if (at <= (x[low] ?? 0) || at >= (x[high] ?? 0)) return 0
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if ((x[middle] ?? 0) <= at) low = middle
    else high = middle
  }
  const x0 = x[low] ?? 0
  const part = (at - x0) / ((x[high] ?? 1) - x0)
  return (y[low] ?? 0) * (1 - part) + (y[high] ?? 0) * part
}

const axisOf = ([first, last, step]: Recipe['axis']): number[] =>
  Array.from({ length: Math.round((last - first) / step) + 1 }, (_, index) => first + index * step)

const measure = (recipe: Recipe): Row[] => {
  const set = ParameterSetSchema.parse(recipe.set)
  const curve = computePreview(set, recipe.temperatureK, 0)[recipe.kind]
  if (curve === null) throw new Error(`expected a curve of ${recipe.kind} for ${recipe.sample}; the engine gave none`)
  const axis = axisOf(recipe.axis)
  const ideal = axis.map((position) => {
    const energy = toEnergy(position, recipe.unit)
    const perMeV = interpolate(curve.energiesMeV, curve.perMeV, energy)
    // A spectrometer counts what falls into one step of wavelength.
    return recipe.unit === 'nm' && recipe.kind === 'emission' ? (perMeV * energy ** 2) / HC_MEV_NM : perMeV
  })
  const scale = recipe.peak / Math.max(...ideal)
  const normal = seededNormal(recipe.seed)
  return axis.map((position, index) => {
    const clean = scale * (ideal[index] ?? 0) + recipe.background
    // Counting statistics for emission, a constant detector noise for absorption.
    const sigma =
      recipe.kind === 'emission' ? recipe.noise * Math.sqrt(clean / (recipe.peak + recipe.background)) : recipe.noise
    return { axis: position, value: clean + sigma * normal(), sigma }
  })
}

const comma = (text: string) => text.replace('.', ',')

/** Points, commas between the columns, remarks with #, an uncertainty column. */
const writePointCsv: Recipe['write'] = (rows, header) =>
  [
    ...header.map((line) => `# ${line}`),
    'Energy (meV),absorbance,standard uncertainty',
    ...rows.map((row) => `${row.axis.toFixed(2)},${row.value.toFixed(6)},${row.sigma.toFixed(6)}`),
    '',
  ].join('\n')

/** Decimal commas, semicolons, CR LF, falling wavelength, counts per step. */
const writeCommaCsv: Recipe['write'] = (rows, header) =>
  [
    ...header,
    'Wavelength (nm);Emission (counts/nm);sigma',
    ...[...rows]
      .reverse()
      .map((row) => [row.axis.toFixed(3), row.value.toFixed(2), row.sigma.toFixed(2)].map(comma).join(';')),
    '',
  ].join('\r\n')

/** Tabs, remarks with %, names and a row of units. */
const writeTabs: Recipe['write'] = (rows, header) =>
  [
    ...header.map((line) => `% ${line}`),
    'Photon energy\tabsorbance',
    'eV\t',
    ...rows.map((row) => `${row.axis.toFixed(5)}\t${row.value.toFixed(6)}`),
    '',
  ].join('\n')

/** Columns of fixed width, exponents. */
const writeBlanks: Recipe['write'] = (rows, header) =>
  [
    ...header.map((line) => `! ${line}`),
    'wavenumber_cm-1    emission          sigma',
    ...rows.map((row) =>
      [
        row.axis.toFixed(2).padStart(10),
        row.value.toExponential(6).padStart(16),
        row.sigma.toExponential(3).padStart(14),
      ].join(''),
    ),
    '',
  ].join('\n')

const a1 = { set: sampleA1, sample: 'A1' } as const
const b2 = { set: sampleB2, sample: 'B2' } as const

const recipes: readonly Recipe[] = [
  {
    ...a1,
    kind: 'absorption',
    temperatureK: 4,
    seed: 20261201,
    unit: 'meV',
    axis: [2035, 2090, 0.15],
    peak: 0.42,
    background: 0.015,
    noise: 0.003,
    write: writePointCsv,
    extension: 'csv',
  },
  {
    ...a1,
    kind: 'emission',
    temperatureK: 4,
    seed: 20261202,
    unit: 'nm',
    axis: [600, 616, 0.04],
    peak: 18000,
    background: 350,
    noise: 140,
    write: writeCommaCsv,
    extension: 'csv',
  },
  {
    ...a1,
    kind: 'absorption',
    temperatureK: 20,
    seed: 20261203,
    unit: 'eV',
    axis: [2.035, 2.09, 0.0002],
    peak: 0.31,
    background: 0.018,
    noise: 0.003,
    write: writeTabs,
    extension: 'txt',
  },
  {
    ...a1,
    kind: 'emission',
    temperatureK: 50,
    seed: 20261204,
    unit: 'cm^-1',
    axis: [16250, 16650, 1],
    peak: 9200,
    background: 300,
    noise: 110,
    write: writeBlanks,
    extension: 'dat',
  },
  {
    ...b2,
    kind: 'absorption',
    temperatureK: 4,
    seed: 20261205,
    unit: 'meV',
    axis: [1960, 2030, 0.25],
    peak: 0.55,
    background: 0.02,
    noise: 0.004,
    write: writePointCsv,
    extension: 'csv',
  },
]

const toSpectrum = (recipe: Recipe): DemoSpectrum => {
  const { sample, kind, temperatureK, seed, unit } = recipe
  const sampleName = `Sample ${sample} (invented)`
  const header = [
    'INVENTED DATA: computed from a model with added noise, never measured',
    `${sampleName}, ${kind} at ${temperatureK} K, seed of the noise ${seed}`,
    ...(unit === 'nm' ? ['wavelengths in vacuum'] : []),
  ]
  return {
    fileName: `invented-${sample.toLowerCase()}-${kind}-${temperatureK}K.${recipe.extension}`,
    name: `${sampleName}, ${kind}, ${temperatureK} K`,
    kind,
    sampleName,
    temperatureK,
    note: `Invented: the model's curve with seeded noise (seed ${seed}), written as a table over ${unit}.`,
    content: Buffer.from(recipe.write(measure(recipe), header), 'utf8'),
  }
}

export const makeDemoSpectra = (): DemoSpectrum[] => recipes.map(toSpectrum)
