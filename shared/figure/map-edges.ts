import type { Box } from './line-layout'
import type { MapFigure, MapPlace } from './map-description'
import { nearestSample, toMapPixel, type MapLayout } from './map-layout'
import { lineTo, moveTo } from './paths'

export interface EdgePaths {
  /** Value against excitation energy at the marked detection energy, in the upper panel. */
  top: string
  /** Value against detection energy at the marked excitation energy, in the right panel. */
  right: string
  /** Zero lines of both panels. */
  zero: string
}

const depthAt = (value: number, range: { low: number; high: number }): number =>
  (value - range.low) / (range.high - range.low)

const isInside = (value: number, range: { low: number; high: number }): boolean =>
  value >= range.low && value <= range.high

const zeroLines = (top: Box, right: Box, zero: number): string => {
  if (zero < 0 || zero > 1) return ''
  const y = top.top + (1 - zero) * top.height
  const x = right.left + zero * right.width
  return (
    moveTo(top.left, y) + lineTo(top.left + top.width, y) + moveTo(x, right.top) + lineTo(x, right.top + right.height)
  )
}

/** Slices through a place as path data. Cheap enough for every move of the pointer: one row and one column are read. */
export const edgePaths = (figure: MapFigure, layout: MapLayout, place: MapPlace): EdgePaths => {
  const paths = { top: '', right: '', zero: '' }
  if (!layout.edges || figure.values.length === 0) return paths
  const { top, right, valueRange } = layout.edges
  const { energies1, energies3, values } = figure
  const columns = energies3.length
  const i0 = nearestSample(energies1, place.energy1)
  const j0 = nearestSample(energies3, place.energy3)
  energies1.forEach((energy1, i) => {
    if (!isInside(energy1, layout.range1)) return
    const x = toMapPixel(layout, { energy1, energy3: 0 }).x
    const y = top.top + (1 - depthAt(values[i * columns + j0] as number, valueRange)) * top.height
    paths.top += paths.top ? lineTo(x, y) : moveTo(x, y)
  })
  energies3.forEach((energy3, j) => {
    if (!isInside(energy3, layout.range3)) return
    const y = toMapPixel(layout, { energy1: 0, energy3 }).y
    const x = right.left + depthAt(values[i0 * columns + j] as number, valueRange) * right.width
    paths.right += paths.right ? lineTo(x, y) : moveTo(x, y)
  })
  paths.zero = zeroLines(top, right, depthAt(0, valueRange))
  return paths
}
