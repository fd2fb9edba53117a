import { contours } from 'd3-contour'
import type { MapPart } from './map-data'

/** One contour: its level and its open or closed lines, in samples of the part (0 = first sample). */
export interface ContourLine {
  level: number
  lines: [along1: number, along3: number][][]
}

/** Levels at equal steps of the reach; zero is left out, because it separates signs and would trace noise. */
export const contourLevels = (reach: number, steps: number, signed: boolean): number[] => {
  if (!(reach > 0) || steps < 2) return []
  const positive = Array.from({ length: steps - 1 }, (_, k) => ((k + 1) / steps) * reach)
  return signed ? [...positive.map((level) => -level).reverse(), ...positive] : positive
}

/**
 * Traces contours by marching squares. d3-contour closes its rings along the border of the grid; those stretches are
 * cut out again, because a line there says nothing.
 */
export const traceContours = (part: MapPart, levels: readonly number[]): ContourLine[] => {
  const { count1, count3 } = part
  if (count1 < 2 || count3 < 2 || levels.length === 0) return []
  const trace = contours().size([count3, count1]).smooth(true)
  // A negative level is traced on the mirrored map, so that its rings enclose the trough and not the rest of the map.
  const values = Array.from(part.values)
  const mirrored = levels.some((level) => level < 0) ? values.map((value) => -value) : []
  return levels.map((level) => {
    const shape = level < 0 ? trace.contour(mirrored, -level) : trace.contour(values, level)
    const lines = shape.coordinates.flatMap((polygon) => polygon.flatMap((ring) => cutAtBorder(ring, count3, count1)))
    return { level, lines: lines.map((line) => line.map(([x, y]) => [y - 0.5, x - 0.5] as [number, number])) }
  })
}

/** Points on the border carry no interpolated place, so a line that reaches it ends at the last point inside. */
const cutAtBorder = (ring: number[][], width: number, height: number): [number, number][][] => {
  const isOnBorder = ([x, y]: number[]): boolean => x === 0 || x === width || y === 0 || y === height
  const start = ring.findIndex(isOnBorder)
  // A ring that touches the border is walked from there, so that no line is cut at the ring's own seam.
  const points = start < 0 ? ring : [...ring.slice(start, -1), ...ring.slice(0, start)]
  const lines: [number, number][][] = []
  let line: [number, number][] = []
  for (const point of points) {
    if (!isOnBorder(point)) line.push(point as [number, number])
    else if (line.length > 0) {
      if (line.length > 1) lines.push(line)
      line = []
    }
  }
  if (line.length > 1) lines.push(line)
  return lines
}
