import { decimate } from './decimate'
import type { FigureSeries } from './line-description'
import { toPixelX, toPixelY, type LineLayout, type Panel } from './line-layout'
import { plainLabel, textWidth } from './style'

export interface CurveLabel {
  seriesId: string
  text: string
  /** Left end and vertical middle of the text, in pixels. */
  x: number
  y: number
}

interface Rectangle {
  left: number
  right: number
  top: number
  bottom: number
}

const overlaps = (a: Rectangle, b: Rectangle): boolean =>
  a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom

/** Labels more than a reader can tell apart are thinned evenly; first and last stay. */
const maxLabels = 9

const thinned = <T>(all: T[], limit: number): T[] => {
  if (all.length <= limit) return all
  const kept = new Set<number>()
  for (let k = 0; k < limit; k++) kept.add(Math.round((k * (all.length - 1)) / (limit - 1)))
  return all.filter((_, index) => kept.has(index))
}

/** Columns in which the height of a curve is looked at. */
const columnWidth = 4

interface Curve {
  points: { x: number; y: number }[]
  /** Highest and lowest pixel of the curve in every column of the frame; NaN where it has none. */
  top: Float64Array
  bottom: Float64Array
}

const curveOf = (panel: Panel, series: FigureSeries, layout: LineLayout): Curve => {
  const { left, width } = layout.main.box
  const columns = Math.ceil(width / columnWidth) + 1
  const top = new Float64Array(columns).fill(NaN)
  const bottom = new Float64Array(columns).fill(NaN)
  const touch = (column: number, y: number) => {
    if (column < 0 || column >= columns || !Number.isFinite(y)) return
    top[column] = Math.min(top[column] || Infinity, y)
    bottom[column] = Math.max(bottom[column] || -Infinity, y)
  }
  const points: Curve['points'] = []
  let before: { x: number; y: number } | null = null
  for (const i of decimate(series.x, series.y, layout.xRange.low, layout.xRange.high, columns)) {
    const point = { x: toPixelX(layout, series.x[i] as number), y: toPixelY(panel, series.y[i] as number) }
    if (!Number.isFinite(point.y)) {
      before = null
      continue
    }
    points.push(point)
    const end = Math.floor((point.x - left) / columnWidth)
    // Every column that the stroke crosses counts, also where a steep flank has few samples.
    const start = before ? Math.floor((before.x - left) / columnWidth) : end
    for (let column = Math.max(0, start); column <= Math.min(columns - 1, end); column++) {
      if (!before || end === start) touch(column, point.y)
      else {
        const at = (edge: number) =>
          before
            ? before.y + (point.y - before.y) * Math.min(1, Math.max(0, (edge - before.x) / (point.x - before.x)))
            : point.y
        touch(column, at(left + column * columnWidth))
        touch(column, at(left + (column + 1) * columnWidth))
      }
    }
    if (before && end === start) touch(end, before.y)
    before = point
  }
  return { points, top, bottom }
}

const columnsBeneath = (curve: Curve, rectangle: Rectangle, left: number): number => {
  const first = Math.max(0, Math.floor((rectangle.left - 3 - left) / columnWidth))
  const last = Math.min(curve.top.length - 1, Math.floor((rectangle.right + 3 - left) / columnWidth))
  let count = 0
  for (let column = first; column <= last; column++) {
    if ((curve.top[column] as number) < rectangle.bottom && (curve.bottom[column] as number) > rectangle.top) count++
  }
  return count
}

/**
 * Puts the name of each curve beside it, where the least of any curve lies beneath the text and, among such places,
 * where the curve stands high: near a peak, not on the base line. Deterministic; a label that finds no free place takes
 * the best one.
 */
export const placeCurveLabels = (layout: LineLayout, panels: readonly Panel[]): CurveLabel[] => {
  const { style } = layout
  const box = layout.main.box
  const all = panels.flatMap((panel) =>
    panel.series.map((series) => ({ series, curve: curveOf(panel, series, layout) })),
  )
  const chosen = new Set(
    thinned(
      all.map((_, index) => index),
      box.width < 380 ? 5 : maxLabels,
    ),
  )
  const placed: Rectangle[] = []
  const labels: CurveLabel[] = []
  const height = style.fontSize * 1.15
  all.forEach(({ series, curve }, index) => {
    const text = plainLabel(series.label)
    if (!chosen.has(index) || curve.points.length === 0 || text === '') return
    const width = 1.06 * textWidth(text, style.fontSize)
    let best: { score: number; rectangle: Rectangle } | null = null
    const step = Math.max(1, Math.floor(curve.points.length / 120))
    for (let i = 0; i < curve.points.length; i += step) {
      const anchor = curve.points[i] as { x: number; y: number }
      if (anchor.x < box.left || anchor.x > box.left + box.width) continue
      for (const [dx, dy] of [
        [7, 0],
        [-7 - width, 0],
        [7, -height * 0.8],
        [-7 - width, -height * 0.8],
        [-width / 2, -height],
      ] as const) {
        const left = anchor.x + dx
        const middle = anchor.y + dy
        const rectangle = { left, right: left + width, top: middle - height / 2, bottom: middle + height / 2 }
        if (rectangle.left < box.left + 8 || rectangle.right > box.left + box.width - 8) continue
        if (rectangle.top < box.top + 4 || rectangle.bottom > box.top + box.height - 4) continue
        const beneath = all.reduce((sum, other) => sum + columnsBeneath(other.curve, rectangle, box.left), 0)
        const collisions = placed.filter((other) => overlaps(rectangle, other)).length
        const depth = (anchor.y - box.top) / box.height
        const score = collisions * 1000 + beneath * 10 + depth * 12
        if (!best || score < best.score) best = { score, rectangle }
      }
    }
    if (!best) return
    placed.push(best.rectangle)
    labels.push({
      seriesId: series.id,
      text,
      x: best.rectangle.left,
      y: (best.rectangle.top + best.rectangle.bottom) / 2,
    })
  })
  return labels
}
