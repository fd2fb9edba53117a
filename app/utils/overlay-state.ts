/** What an overlay shows, as it stands in the address: everything that is needed to see the same figure again. */

export const spectrumKinds = ['absorption', 'emission'] as const
export type SpectrumKind = (typeof spectrumKinds)[number]

export interface OverlayCurve {
  runId: string
  temperatureIndex: number
  kind: SpectrumKind
  /** Which of the chosen measurements it is compared with. */
  against: number
  /** Held by hand; null is found by least squares. */
  scale: number | null
  offset: number | null
}

export const overlayCurveId = (curve: OverlayCurve): string => `${curve.runId}:${curve.temperatureIndex}:${curve.kind}`

const uuid = /^[0-9a-f]{8}-(?:[0-9a-f]{4}-){3}[0-9a-f]{12}$/
/** More curves than this no figure can show, and no address should ask a server for. */
const mostCurves = 32

/** `run:temperature:kind`, then `m1` for the second measurement, `k2.5` a held scale, `o0.1` a held offset. */
const parseCurve = (text: string): OverlayCurve | null => {
  const [runId = '', index = '', kind = '', ...options] = text.split(':')
  const known = spectrumKinds.find((each) => each === kind)
  if (!uuid.test(runId) || !/^\d{1,3}$/.test(index) || !known) return null
  const curve: OverlayCurve = {
    runId,
    temperatureIndex: Number(index),
    kind: known,
    against: 0,
    scale: null,
    offset: null,
  }
  for (const option of options) {
    const value = Number(option.slice(1))
    if (option.length < 2 || !Number.isFinite(value)) return null
    if (option.startsWith('m') && Number.isInteger(value) && value >= 0) curve.against = value
    else if (option.startsWith('k')) curve.scale = value
    else if (option.startsWith('o')) curve.offset = value
    else return null
  }
  return curve
}

const unique = <T>(list: readonly T[], keyOf: (item: T) => string): T[] => [
  ...new Map(list.map((item) => [keyOf(item), item])).values(),
]

export const parseCurves = (text: string): OverlayCurve[] =>
  unique(
    text
      .split(',')
      .map(parseCurve)
      .filter((curve) => curve !== null),
    overlayCurveId,
  ).slice(0, mostCurves)

export const formatCurves = (curves: readonly OverlayCurve[]): string =>
  curves
    .map((curve) =>
      [
        overlayCurveId(curve),
        curve.against > 0 && `m${curve.against}`,
        curve.scale !== null && `k${curve.scale}`,
        curve.offset !== null && `o${curve.offset}`,
      ]
        .filter(Boolean)
        .join(':'),
    )
    .join(',')

export const parseIds = (text: string): string[] =>
  [...new Set(text.split(',').filter((id) => uuid.test(id)))].slice(0, mostCurves)
