import type { ColorMode, SeriesRole } from './palette'
import type { Range } from './ticks'

export type Scale = 'linear' | 'log'

export interface FigureSeries {
  id: string
  /** Text at the curve and in tables; plain text. */
  label: string
  role: SeriesRole
  /** Ascending. */
  x: Float64Array
  y: Float64Array
  /** One standard deviation per point, drawn as error bars. */
  uncertainty?: Float64Array | null
  /** 0..1 along a series of temperatures, cold to hot. */
  shade?: number
  axis?: 'left' | 'right'
  /** Stands out among its like: the temperature that is being looked at. */
  isStrong?: boolean
  /** How a line is drawn; solid unless said. Tells parts of one signal apart without a second colour. */
  stroke?: 'solid' | 'dashed' | 'dotted'
}

/** A figure of curves, without any colour, pixel or library in it. */
export interface LineFigure {
  series: readonly FigureSeries[]
  /** Quantity with its unit in parentheses. */
  xLabel: string
  yLabel: string
  rightLabel?: string
  /** Title of the residual panel; the panel exists when a series has the role `residual`. */
  residualLabel?: string
  scale: Scale
  xRange?: Range
  yRange?: Range
  /** Decades shown below the maximum on a logarithmic axis. */
  decades?: number
}

/** Size and theme a description is drawn with. */
export interface FigureFrame {
  width: number
  height: number
  mode: ColorMode
}
