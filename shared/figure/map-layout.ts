import type { FigureFrame } from './line-description'
import type { Box } from './line-layout'
import { reachOf } from './map-data'
import type { MapFigure, MapPlace } from './map-description'
import { figureStyle, textWidth, type FigureStyle } from './style'
import { valueScaleOf, type ValueScale } from './map-scale'
import { linearTicks, type AxisTicks, type Range } from './ticks'

export interface MapLayout {
  style: FigureStyle
  box: Box
  bar: Box
  /** Panels of the edge slices and the shares of the reach across them; null when the map carries none. */
  edges: { top: Box; right: Box; shares: Range } | null
  range1: Range
  range3: Range
  ticks1: AxisTicks
  ticks3: AxisTicks
  values: ValueScale
}

const axisRange = (axis: Float64Array): Range => {
  const low = axis[0] ?? 0
  const high = axis[axis.length - 1] ?? 1
  return high > low ? { low, high } : { low: low - 0.5, high: low + 0.5 }
}

/** Pixels that a map needs beside its square, by width: from that the height follows. */
const barWidth = 12
const edgeGap = 6

const edgeSize = (width: number): number => Math.round(Math.min(88, Math.max(44, width * 0.15)))

const margins = (style: FigureStyle, labels: { y: number; value: number; title: boolean }, edge: number) => ({
  top: 8 + edge,
  bottom: style.fontSize + style.titleSize + 20,
  left: Math.ceil(labels.y + style.titleSize + 18),
  right: Math.ceil(edge + 14 + barWidth + 6 + labels.value + (labels.title ? style.titleSize + 16 : 6)),
})

/** A tenth wider than Source Sans 3: where a file meets another font, labels and titles still keep apart. */
const widest = (ticks: AxisTicks, size: number): number =>
  ticks.labels.reduce((width, label) => Math.max(width, 1.1 * textWidth(label, size)), 0)

const measure = (figure: MapFigure, frame: { width: number; mode: FigureFrame['mode'] }, side: number) => {
  const style = figureStyle(frame.mode, frame.width)
  const range1 = figure.range1 ?? axisRange(figure.energies1)
  const range3 = figure.range3 ?? axisRange(figure.energies3)
  const reach = figure.reach ?? reachOf(figure.values)
  const ticks1 = linearTicks(range1, Math.max(2, Math.round(side / 80)), side)
  const ticks3 = linearTicks(range3, Math.max(2, Math.round(side / 60)), side)
  const values = valueScaleOf(figure.scale ?? 'linear', reach, figure.signed, side)
  const edge = figure.edges ? edgeSize(frame.width) + edgeGap : 0
  const labels = {
    y: widest(ticks3, style.fontSize),
    value: widest(values.ticks, style.fontSize),
    title: Boolean(figure.valueLabel),
  }
  return { style, range1, range3, ticks1, ticks3, values, around: margins(style, labels, edge), edge }
}

/** The largest figure whose map is square and that fits into a width and a height. */
export const squareSize = (
  figure: MapFigure,
  width: number,
  maxHeight = Infinity,
): { width: number; height: number } => {
  const { around } = measure(figure, { width, mode: 'light' }, width * 0.7)
  const wide = Math.max(80, width - around.left - around.right)
  const side = Math.max(80, Math.min(wide, maxHeight - around.top - around.bottom))
  return {
    width: Math.round(side + around.left + around.right),
    height: Math.round(side + around.top + around.bottom),
  }
}

/** What the edge slices span: the values of the whole map, so that slices keep their scale while the place moves. */
const edgeShares = (figure: MapFigure, { toShare, range }: ValueScale): Range => {
  let low = 0
  let high = 0
  for (const value of figure.values) {
    if (value < low) low = value
    if (value > high) high = value
  }
  const [bottom, top] = low < high ? [toShare(low), toShare(high)] : [toShare(range.low), toShare(range.high)]
  const margin = 0.06 * (top - bottom)
  return { low: bottom - margin, high: top + margin }
}

/** Where everything of a map figure stands, in CSS pixels. The map is square; spare room stays on the right. */
export const mapLayout = (figure: MapFigure, frame: FigureFrame): MapLayout => {
  const { around, edge, ...rest } = measure(figure, frame, Math.min(frame.width * 0.7, frame.height - 50))
  const side = Math.max(
    40,
    Math.min(frame.width - around.left - around.right, frame.height - around.top - around.bottom),
  )
  const box = { left: around.left, top: around.top, width: side, height: side }
  const bar = { left: around.left + side + edge + 14, top: around.top, width: barWidth, height: side }
  const depth = edge - edgeGap
  const edges = figure.edges
    ? {
        top: { left: box.left, top: box.top - edge, width: side, height: depth },
        right: { left: box.left + side + edgeGap, top: box.top, width: depth, height: side },
        shares: edgeShares(figure, rest.values),
      }
    : null
  return { ...rest, box, bar, edges }
}

/** Vertical place of a value on the colour bar. */
export const toBarPixel = (layout: MapLayout, value: number): number => {
  const { toShare, range } = layout.values
  const low = toShare(range.low)
  return layout.bar.top + (1 - (toShare(value) - low) / (toShare(range.high) - low)) * layout.bar.height
}

const along = (range: Range, value: number): number => (value - range.low) / (range.high - range.low)

export const toMapPixel = (layout: MapLayout, place: MapPlace): { x: number; y: number } => ({
  x: layout.box.left + along(layout.range1, place.energy1) * layout.box.width,
  y: layout.box.top + (1 - along(layout.range3, place.energy3)) * layout.box.height,
})

export const fromMapPixel = (layout: MapLayout, x: number, y: number): MapPlace => ({
  energy1: layout.range1.low + ((x - layout.box.left) / layout.box.width) * (layout.range1.high - layout.range1.low),
  energy3:
    layout.range3.low + (1 - (y - layout.box.top) / layout.box.height) * (layout.range3.high - layout.range3.low),
})

/** Index of the sample nearest to an energy, kept inside the axis. */
export const nearestSample = (axis: Float64Array, energy: number): number => {
  if (axis.length < 2) return 0
  const step = ((axis[axis.length - 1] as number) - (axis[0] as number)) / (axis.length - 1)
  return Math.min(axis.length - 1, Math.max(0, Math.round((energy - (axis[0] as number)) / step)))
}
