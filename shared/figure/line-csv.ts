import { toCsv, type CsvColumn } from './csv'
import { quantityOf, unitOf } from './format'
import type { FigureSeries, LineFigure } from './line-description'

const isSameAxis = (a: Float64Array, b: Float64Array): boolean =>
  a === b || (a.length === b.length && a.every((value, index) => value === b[index]))

const labelOf = (figure: LineFigure, series: FigureSeries): string => {
  if (series.role === 'residual') return figure.residualLabel ?? 'residual'
  return series.axis === 'right' ? (figure.rightLabel ?? '') : figure.yLabel
}

/** Every point of a line figure, not only the drawn ones; curves on the same axis share its column. */
export const lineFigureCsv = (figure: LineFigure): string => {
  const columns: CsvColumn[] = []
  let axis: Float64Array | null = null
  for (const series of figure.series) {
    if (!axis || !isSameAxis(axis, series.x)) columns.push({ name: figure.xLabel, values: series.x })
    axis = series.x
    const label = labelOf(figure, series)
    const unit = unitOf(label) ? ` (${unitOf(label)})` : ''
    columns.push({ name: `${quantityOf(label)}, ${series.label}${unit}`, values: series.y })
    if (series.uncertainty) {
      columns.push({ name: `uncertainty, ${series.label}${unit}`, values: series.uncertainty })
    }
  }
  return toCsv(columns)
}
