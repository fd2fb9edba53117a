import { formatDigits, quantityOf, unitOf } from './format'
import type { FigureSeries, LineFigure } from './line-description'

const withUnit = (value: number, unit: string): string => `${formatDigits(value)}${unit ? ` ${unit}` : ''}`

const roleNames = {
  simulation: 'simulation',
  measurement: 'measurement',
  residual: 'residual',
  secondary: 'secondary curve',
} as const

const peakOf = (series: FigureSeries): number => {
  let best = 0
  for (let i = 1; i < series.y.length; i++) if ((series.y[i] as number) > (series.y[best] as number)) best = i
  return best
}

/** What a figure of curves shows, in sentences, for a reader who cannot see it. */
export const summarizeLines = (figure: LineFigure): string => {
  const xUnit = unitOf(figure.xLabel)
  const curves = figure.series.filter((series) => series.role !== 'residual' && series.x.length > 0)
  const head = `${quantityOf(figure.yLabel)} against ${quantityOf(figure.xLabel)}${figure.scale === 'log' ? ', logarithmic' : ''}`
  if (curves.length === 0) return `${head}: nothing to show yet.`
  const listed = curves.slice(0, 12).map((series) => {
    const peak = peakOf(series)
    const yUnit = unitOf(series.axis === 'right' ? (figure.rightLabel ?? '') : figure.yLabel)
    const at = withUnit(series.x[peak] as number, xUnit)
    return `${series.label} (${roleNames[series.role]}): maximum ${withUnit(series.y[peak] as number, yUnit)} at ${at}`
  })
  const rest = curves.length > 12 ? ` And ${curves.length - 12} more.` : ''
  const panel = figure.series.some((series) => series.role === 'residual') ? ' With a residual panel.' : ''
  return `${head}. ${listed.join('; ')}.${rest}${panel}`
}
