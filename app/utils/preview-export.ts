import { ENGINE_VERSION } from '#shared/engine/engine-version'
import type { Preview, PreviewCurve } from '#shared/engine/preview'
import { toCsv, type CsvColumn } from '#shared/figure/csv'
import type { PreviewInput } from './preview-queue'

const plain = (value: unknown): unknown => {
  if (value instanceof Float64Array) return Array.from(value)
  if (Array.isArray(value)) return value.map(plain)
  if (typeof value !== 'object' || value === null) return value
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, plain(inner)]))
}

/** Everything that is drawn, with all digits, the set it came from and the engine's version. */
export const previewJson = (preview: Preview, input: PreviewInput): string => {
  const { set, temperatureK, waitingTimePs } = input
  const content = {
    kind: 'preview',
    engineVersion: ENGINE_VERSION,
    temperatureK,
    waitingTimePs,
    set,
    preview: plain(preview),
  }
  return `${JSON.stringify(content, null, 1)}\n`
}

const linearColumns = (name: string, curve: PreviewCurve | null): CsvColumn[] =>
  curve
    ? [
        { name: `${name} energy (meV)`, values: curve.energiesMeV },
        { name: `${name} (1/meV)`, values: curve.perMeV },
      ]
    : []

/** The drawn curves in columns, all digits; a curve that the model does not allow is left out. */
export const previewCsv = ({ spectralDensity, absorption, emission, crossDiagonal }: Preview): string =>
  toCsv([
    { name: 'phonon energy (meV)', values: spectralDensity.energiesMeV },
    { name: 'spectral density (meV)', values: spectralDensity.densityMeV },
    ...linearColumns('absorption', absorption),
    ...linearColumns('emission', emission),
    ...(crossDiagonal
      ? [
          { name: 'shift E3-E1 (meV)', values: crossDiagonal.shiftsMeV },
          { name: 'rephasing slice, real', values: crossDiagonal.re },
          { name: 'rephasing slice, imaginary', values: crossDiagonal.im },
          { name: 'rephasing slice, magnitude', values: crossDiagonal.magnitude },
        ]
      : []),
  ])
