import type { LineFigure } from '../../../../shared/figure/line-description'
import type { MapFigure } from '../../../../shared/figure/map-description'

/** Two Lorentzian lines, a coarse measurement and its residual: small enough to read, complete enough to draw. */
export const sampleLines = (change: Partial<LineFigure> = {}): LineFigure => {
  const x = Float64Array.from({ length: 81 }, (_, i) => 1980 + 0.5 * i)
  const line = (width: number) => Float64Array.from(x, (e) => width / (Math.PI * ((e - 2000) ** 2 + width * width)))
  const points = Float64Array.from({ length: 21 }, (_, i) => 1990 + i)
  const measured = Float64Array.from(points, (e, i) => 2 / (Math.PI * ((e - 2000) ** 2 + 4)) + 0.002 * (-1) ** i)
  return {
    xLabel: 'photon energy (meV)',
    yLabel: 'absorption (1/meV)',
    residualLabel: 'residual (σ)',
    scale: 'linear',
    series: [
      { id: 'cold', label: '4 K', role: 'simulation', x, y: line(2), shade: 0 },
      { id: 'hot', label: '300 K', role: 'simulation', x, y: line(5), shade: 1 },
      {
        id: 'measured',
        label: 'measured',
        role: 'measurement',
        x: points,
        y: measured,
        uncertainty: points.map(() => 0.003),
      },
      { id: 'left', label: 'measured', role: 'residual', x: points, y: points.map((_, i) => (-1) ** i) },
    ],
    ...change,
  }
}

/** A tilted peak with a trough below the diagonal on a 41 x 41 grid. */
export const sampleMap = (change: Partial<MapFigure> = {}): MapFigure => {
  const axis = Float64Array.from({ length: 41 }, (_, i) => 1990 + 0.5 * i)
  const values = new Float64Array(axis.length ** 2)
  axis.forEach((e1, i) =>
    axis.forEach((e3, j) => {
      const along = (e1 + e3) / 2 - 2000
      const across = e3 - e1
      values[i * axis.length + j] =
        Math.exp(-(along ** 2) / 18 - across ** 2 / 4) - 0.5 * Math.exp(-(along ** 2) / 18 - (across + 6) ** 2 / 4)
    }),
  )
  return {
    energies1: axis,
    energies3: axis,
    values,
    signed: true,
    xLabel: 'excitation energy (meV)',
    yLabel: 'detection energy (meV)',
    valueLabel: 'absorptive (1)',
    ...change,
  }
}

/** Functions named, numbers rounded: what is left of an option is stable across machines. */
export const rounded = (value: unknown): unknown => {
  if (typeof value === 'number') return Number(value.toPrecision(4))
  if (typeof value === 'string') return value.replace(/-?\d+\.\d+/g, (digits) => String(Math.round(Number(digits))))
  if (typeof value === 'function') return 'function'
  if (Array.isArray(value)) {
    const list = value.map(rounded)
    return list.length > 12 ? [...list.slice(0, 3), `and ${list.length - 6} more`, ...list.slice(-3)] : list
  }
  if (ArrayBuffer.isView(value)) return rounded([...(value as Float64Array)])
  if (value === null || typeof value !== 'object') return value
  return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, rounded(inner)]))
}
