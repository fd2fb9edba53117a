import type { Box } from './line-layout'
import type { MapFigure, MapPlace } from './map-description'
import { nearestSample, toMapPixel, type MapLayout } from './map-layout'
import { lineTo, moveTo } from './paths'
import type { Range } from './ticks'

export interface EdgePaths {
  /** Value against excitation energy at the marked detection energy, in the upper panel. */
  top: string
  /** Value against detection energy at the marked excitation energy, in the right panel. */
  right: string
  /** Zero lines of both panels. */
  zero: string
}

/** Place of a value across an edge panel, 0..1, on the same scale as the colours. */
const depthOf =
  (layout: MapLayout, shares: Range): ((value: number) => number) =>
  (value) =>
    (layout.values.toShare(value) - shares.low) / (shares.high - shares.low)

const isInside = (value: number, range: Range): boolean => value >= range.low && value <= range.high

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
  const { top, right, shares } = layout.edges
  const depth = depthOf(layout, shares)
  const { energies1, energies3, values } = figure
  const columns = energies3.length
  const i0 = nearestSample(energies1, place.energy1)
  const j0 = nearestSample(energies3, place.energy3)
  energies1.forEach((energy1, i) => {
    if (!isInside(energy1, layout.range1)) return
    const x = toMapPixel(layout, { energy1, energy3: 0 }).x
    const y = top.top + (1 - depth(values[i * columns + j0] as number)) * top.height
    paths.top += paths.top ? lineTo(x, y) : moveTo(x, y)
  })
  energies3.forEach((energy3, j) => {
    if (!isInside(energy3, layout.range3)) return
    const y = toMapPixel(layout, { energy1: 0, energy3 }).y
    const x = right.left + depth(values[i0 * columns + j] as number) * right.width
    paths.right += paths.right ? lineTo(x, y) : moveTo(x, y)
  })
  paths.zero = zeroLines(top, right, depth(0))
  return paths
}
