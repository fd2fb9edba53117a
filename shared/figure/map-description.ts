import type { Range } from './ticks'

export interface MapPlace {
  energy1: number
  energy3: number
}

/** A two-dimensional map, without any colour, pixel or library in it. */
export interface MapFigure {
  /** Uniform, ascending: excitation energies, drawn along the horizontal axis. */
  energies1: Float64Array
  /** Uniform, ascending: detection energies, drawn along the vertical axis. */
  energies3: Float64Array
  /** Row-major, one row per excitation energy: values[i1 * energies3.length + i3]. */
  values: Float64Array | Float32Array
  /** Signed maps take the diverging colours with a symmetric range, others the sequential ones from zero. */
  signed: boolean
  xLabel: string
  yLabel: string
  /** Title of the colour bar, unit in parentheses. */
  valueLabel?: string
  /** Largest magnitude shown; maps of one run share it so that they can be compared. Default: that of this map. */
  reach?: number
  /**
   * `asinh` compresses large values, so that sidebands of a hundredth of the maximum show beside it: linear below 1 % of
   * the reach, logarithmic above, for both signs. Contours then stand at equal steps of the compressed value.
   */
  scale?: 'linear' | 'asinh'
  /** Part of both axes that is shown; the same span on both keeps the map square. */
  range1?: Range
  range3?: Range
  /** Contours at equal steps of the reach, zero left out. 0 draws none. */
  contourSteps?: number
  place?: MapPlace | null
  /** Slices through the marked place on the upper and right edge of the map. */
  edges?: boolean
}
