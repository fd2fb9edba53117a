import type { FigureFrame, FigureSeries, LineFigure } from './line-description'
import { figureStyle, textWidth, type FigureStyle } from './style'
import { linearTicks, logTicks, type AxisTicks, type Range } from './ticks'

export interface Box {
  left: number
  top: number
  width: number
  height: number
}

export interface Panel {
  box: Box
  yRange: Range
  yTicks: AxisTicks
  series: FigureSeries[]
  isLog: boolean
}

export interface LineLayout {
  style: FigureStyle
  xRange: Range
  xTicks: AxisTicks
  main: Panel
  /** Axis of the series with `axis: 'right'`; shares the main panel's box. */
  right: Panel | null
  residual: Panel | null
}

export const defaultDecades = 5

const xExtent = (series: readonly FigureSeries[]): Range => {
  let low = Infinity
  let high = -Infinity
  for (const { x } of series) {
    const first = x[0]
    const last = x[x.length - 1]
    if (first === undefined || last === undefined) continue
    low = Math.min(low, first)
    high = Math.max(high, last)
  }
  return low < high ? { low, high } : Number.isFinite(low) ? { low: low - 0.5, high: low + 0.5 } : { low: 0, high: 1 }
}

/** Smallest, largest and smallest positive value of the series within the x range, error bars included. */
const yExtent = (series: readonly FigureSeries[], xRange: Range) => {
  let low = Infinity
  let high = -Infinity
  let smallestPositive = Infinity
  for (const { x, y, uncertainty } of series) {
    for (let i = 0; i < x.length; i++) {
      const at = x[i] as number
      const value = y[i] as number
      if (at < xRange.low || at > xRange.high || !Number.isFinite(value)) continue
      const sigma = uncertainty?.[i] ?? 0
      low = Math.min(low, value - sigma)
      high = Math.max(high, value + sigma)
      if (value > 0) smallestPositive = Math.min(smallestPositive, value)
    }
  }
  return { low, high, smallestPositive }
}

const linearRange = (series: readonly FigureSeries[], xRange: Range, symmetric: boolean): Range => {
  const { low, high } = yExtent(series, xRange)
  if (!(low <= high)) return { low: 0, high: 1 }
  if (symmetric) {
    const reach = Math.max(Math.abs(low), Math.abs(high)) || 1
    return { low: -1.12 * reach, high: 1.12 * reach }
  }
  const span = high - Math.min(0, low) || Math.abs(high) || 1
  // A curve that rests on zero keeps clear of the frame.
  return { low: low >= 0 ? -0.02 * span : low - 0.05 * span, high: high + 0.06 * span }
}

const logRange = (series: readonly FigureSeries[], xRange: Range, decades: number): Range => {
  const { high, smallestPositive } = yExtent(series, xRange)
  if (!(high > 0)) return { low: -1, high: 0 }
  const top = Math.log10(high)
  const bottom = Math.max(top - decades, Math.log10(smallestPositive))
  const span = Math.max(top - bottom, 0.1)
  return { low: top - span - 0.02 * span, high: top + 0.06 * span }
}

const panelOf = (
  series: FigureSeries[],
  figure: LineFigure,
  xRange: Range,
  box: Box,
  kind: 'main' | 'right' | 'residual',
): Panel => {
  const isLog = kind !== 'residual' && figure.scale === 'log'
  const given = kind === 'main' ? figure.yRange : undefined
  const decades = figure.decades ?? defaultDecades
  const yRange = given
    ? isLog
      ? { low: Math.log10(Math.max(given.low, given.high * 10 ** -decades)), high: Math.log10(given.high) }
      : given
    : isLog
      ? logRange(series, xRange, decades)
      : linearRange(series, xRange, kind === 'residual')
  // Decades are what a logarithmic axis is read by, so they may stand closer than values of a linear one.
  const perLabel = kind === 'residual' ? 28 : isLog ? 26 : 52
  const wanted = Math.max(2, Math.round(box.height / perLabel))
  return {
    box,
    yRange,
    yTicks: isLog ? logTicks(yRange, wanted) : linearTicks(yRange, wanted, box.height),
    series,
    isLog,
  }
}

/** A tenth wider than Source Sans 3: where a file meets another font, labels and titles still keep apart. */
const widest = (ticks: AxisTicks, size: number): number =>
  ticks.labels.reduce((width, label) => Math.max(width, 1.1 * textWidth(label, size)), 0)

/** Where everything of a line figure stands, in CSS pixels. Pure arithmetic, so page and server agree. */
export const lineLayout = (figure: LineFigure, frame: FigureFrame): LineLayout => {
  const style = figureStyle(frame.mode, frame.width)
  const residuals = figure.series.filter((one) => one.role === 'residual')
  const right = figure.series.filter((one) => one.role !== 'residual' && one.axis === 'right')
  const main = figure.series.filter((one) => one.role !== 'residual' && one.axis !== 'right')
  const xRange = figure.xRange ?? xExtent(figure.series)

  const top = 8
  const bottom = style.fontSize + style.titleSize + 20
  const inner = Math.max(40, frame.height - top - bottom)
  const gap = 8
  const residualHeight = residuals.length > 0 ? Math.round((inner - gap) * 0.24) : 0
  const mainHeight = residuals.length > 0 ? inner - gap - residualHeight : inner

  // The left margin depends on tick labels, which depend on heights only: one pass with any width suffices.
  const probe: Box = { left: 0, top, width: 1, height: mainHeight }
  const mainProbe = panelOf(main, figure, xRange, probe, 'main')
  const residualBox = { ...probe, top: top + mainHeight + gap, height: residualHeight }
  const residualProbe = residuals.length > 0 ? panelOf(residuals, figure, xRange, residualBox, 'residual') : null
  const rightProbe = right.length > 0 ? panelOf(right, figure, xRange, probe, 'right') : null

  const labels = Math.max(
    widest(mainProbe.yTicks, style.fontSize),
    residualProbe ? widest(residualProbe.yTicks, style.fontSize) : 0,
  )
  const left = Math.ceil(labels + style.titleSize + 18)
  const rightMargin = rightProbe ? Math.ceil(widest(rightProbe.yTicks, style.fontSize) + style.titleSize + 18) : 14
  const width = Math.max(40, frame.width - left - rightMargin)
  const place = (panel: Panel): Panel => ({ ...panel, box: { ...panel.box, left, width } })
  return {
    style,
    xRange,
    xTicks: linearTicks(xRange, Math.max(2, Math.round(width / 75)), width),
    main: place(mainProbe),
    right: rightProbe && place(rightProbe),
    residual: residualProbe && place(residualProbe),
  }
}

export const toPixelX = (layout: { main: { box: Box }; xRange: Range }, x: number): number =>
  layout.main.box.left + ((x - layout.xRange.low) / (layout.xRange.high - layout.xRange.low)) * layout.main.box.width

export const fromPixelX = (layout: { main: { box: Box }; xRange: Range }, pixel: number): number =>
  layout.xRange.low +
  ((pixel - layout.main.box.left) / layout.main.box.width) * (layout.xRange.high - layout.xRange.low)

/** Value in drawn coordinates: decades on a log axis, NaN where a logarithm does not exist. */
export const drawn = (panel: Panel, value: number): number =>
  panel.isLog ? (value > 0 ? Math.log10(value) : NaN) : value

export const toPixelY = (panel: Panel, value: number): number =>
  panel.box.top +
  panel.box.height -
  ((drawn(panel, value) - panel.yRange.low) / (panel.yRange.high - panel.yRange.low)) * panel.box.height
