import { fitScaleOffset, type FitFailure, type ScaleOffsetFit } from '#engine/compare'
import type { FigureSeries } from '#shared/figure/line-description'
import type { Range } from '#shared/figure/ticks'
import type { OverlayCurve } from './overlay-state'

export interface LoadedMeasurement {
  id: string
  name: string
  energiesMeV: Float64Array
  values: Float64Array
  uncertainties: Float64Array | null
}

export interface LoadedCurve {
  curve: OverlayCurve
  id: string
  /** Set, version, temperature and kind. */
  label: string
  /** At the curve in the figure. */
  shortLabel: string
  temperatureK: number
  energiesMeV: Float64Array
  values: Float64Array
}

export interface OverlayRow {
  loaded: LoadedCurve
  against: LoadedMeasurement | null
  fit: ScaleOffsetFit | FitFailure | null
}

/** Compares each curve with its measurement. */
export const compareCurves = (
  curves: readonly LoadedCurve[],
  measurements: readonly LoadedMeasurement[],
  range: Range | null,
): OverlayRow[] =>
  curves.map((loaded) => {
    const against = measurements[loaded.curve.against] ?? measurements[0] ?? null
    if (!against) return { loaded, against, fit: null }
    const { scale, offset } = loaded.curve
    const fit = fitScaleOffset(against, loaded, {
      scale: scale ?? undefined,
      offset: offset ?? undefined,
      rangeMeV: range ? [range.low, range.high] : undefined,
    })
    return { loaded, against, fit }
  })

/** Scale and offset that a curve is drawn with. */
export const drawnWith = ({ loaded, fit }: OverlayRow): { scale: number; offset: number } =>
  fit?.ok
    ? { scale: fit.scale.value, offset: fit.offset.value }
    : { scale: loaded.curve.scale ?? 1, offset: loaded.curve.offset ?? 0 }

/** Everything on one axis: measurements as points, scaled simulations as lines, the residual of one of them. */
export const overlaySeries = (
  rows: readonly OverlayRow[],
  measurements: readonly LoadedMeasurement[],
  residualOf: string | null,
): FigureSeries[] => {
  const temperatures = [...new Set(rows.map((row) => row.loaded.temperatureK))].sort((a, b) => a - b)
  const shadeOf = (temperature: number) =>
    temperatures.length > 1 ? temperatures.indexOf(temperature) / (temperatures.length - 1) : undefined
  const points = measurements.map((one): FigureSeries => ({
    id: `measurement/${one.id}`,
    label: one.name,
    role: 'measurement',
    x: one.energiesMeV,
    y: one.values,
    uncertainty: one.uncertainties,
  }))
  const lines = rows.map((row): FigureSeries => {
    const { scale, offset } = drawnWith(row)
    return {
      id: row.loaded.id,
      label: row.loaded.shortLabel,
      role: 'simulation',
      stroke: row.loaded.curve.kind === 'emission' ? 'dashed' : 'solid',
      shade: shadeOf(row.loaded.temperatureK),
      isStrong: rows.length > 1 && row.loaded.id === residualOf,
      x: row.loaded.energiesMeV,
      y: row.loaded.values.map((value) => scale * value + offset),
    }
  })
  const chosen = rows.find((row) => row.loaded.id === residualOf)
  const residual: FigureSeries[] = chosen?.fit?.ok
    ? [
        {
          id: `residual/${chosen.loaded.id}`,
          label: chosen.loaded.label,
          role: 'residual',
          x: chosen.fit.energiesMeV,
          y: chosen.fit.residuals,
        },
      ]
    : []
  return [...points, ...lines, ...residual]
}
