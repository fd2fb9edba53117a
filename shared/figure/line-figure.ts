import { placeCurveLabels } from './curve-labels'
import { decimate } from './decimate'
import type { FigureFrame, FigureSeries, LineFigure } from './line-description'
import { drawn, lineLayout, toPixelX, toPixelY, type Box, type LineLayout, type Panel } from './line-layout'
import { labelHex, seriesHex } from './palette'
import { discsPath, errorBarsPath, framePath, tickPath } from './paths'
import { fontFamily, plainLabel, type FigureStyle } from './style'
import { labelWithFactor, type AxisTicks, type Range } from './ticks'

/** What echarts takes; its own option type is a union so wide that it checks little more than this. */
export type ChartOption = Record<string, unknown>

/** A custom series that draws fixed elements: one dummy datum, everything in pixels of the layout. */
export const drawing = (id: string, z: number, axis: { x: number; y: number }, clip: boolean, children: unknown[]) => ({
  id,
  type: 'custom',
  coordinateSystem: 'cartesian2d',
  xAxisIndex: axis.x,
  yAxisIndex: axis.y,
  silent: true,
  animation: false,
  clip,
  z,
  data: [[0, 0]],
  // Merging children by index leaves remains of the figure before it; each figure is drawn afresh.
  renderItem: () => ({ type: 'group', silent: true, $mergeChildren: false, children }),
})

export const axisOption = (
  kind: 'x' | 'y',
  index: number,
  options: {
    range: Range
    ticks: AxisTicks
    label: string
    labelGap: number
    showLabels: boolean
    position: 'bottom' | 'left' | 'right'
    style: FigureStyle
  },
) => {
  const { range, ticks, style } = options
  const texts = new Map(ticks.major.map((value, i) => [value, ticks.labels[i] ?? '']))
  return {
    type: 'value',
    gridIndex: index,
    position: options.position,
    min: range.low,
    max: range.high,
    name: options.showLabels ? plainLabel(labelWithFactor(options.label, ticks.factorExponent)) : '',
    nameLocation: 'middle',
    nameGap: options.labelGap,
    nameMoveOverlap: false,
    nameRotate: kind === 'x' ? 0 : 90,
    nameTextStyle: { fontFamily, fontSize: style.titleSize, color: style.ink },
    // Frame and ticks are drawn by our own path: inward, on all four sides, with minor ticks that a log axis needs.
    axisLine: { show: false },
    axisTick: { show: false },
    splitLine: { show: false },
    axisPointer: { show: false },
    axisLabel: {
      show: options.showLabels,
      customValues: ticks.major,
      formatter: (value: number) => texts.get(value) ?? '',
      fontFamily,
      fontSize: style.fontSize,
      color: style.ink,
      margin: 7,
      hideOverlap: false,
    },
    animation: false,
  }
}

export const gridOption = (box: Box) => ({
  left: box.left,
  top: box.top,
  width: box.width,
  height: box.height,
  outerBoundsMode: 'none',
  show: false,
})

const textElement = (text: string, x: number, y: number, fill: string, style: FigureStyle) => ({
  type: 'text',
  silent: true,
  style: {
    text,
    x,
    y,
    fill,
    font: `600 ${style.fontSize}px ${fontFamily}`,
    textAlign: 'left',
    textVerticalAlign: 'middle',
    // A narrow halo of paper keeps a label readable where a curve passes beneath it.
    stroke: style.paper,
    lineWidth: 3,
  },
})

const frameElements = (panel: Panel, right: Panel | null, layout: LineLayout): unknown[] => {
  const { style, xTicks } = layout
  const { box } = panel
  const xs = (values: number[]) => values.map((value) => toPixelX(layout, value))
  const ys = (one: Panel, values: number[]) =>
    values.map(
      (value) => box.top + box.height - ((value - one.yRange.low) / (one.yRange.high - one.yRange.low)) * box.height,
    )
  const sides = (one: Panel) => ({ major: ys(one, one.yTicks.major), minor: ys(one, one.yTicks.minor) })
  const ticks = {
    x: { major: xs(xTicks.major), minor: xs(xTicks.minor) },
    left: sides(panel),
    right: sides(right ?? panel),
  }
  const pen = { fill: 'none', stroke: style.ink, lineWidth: style.hairline }
  return [
    { type: 'path', silent: true, shape: { pathData: framePath(box) }, style: pen },
    { type: 'path', silent: true, shape: { pathData: tickPath(box, ticks, style) }, style: pen },
  ]
}

/** Points with error bars as two paths. */
const pointElements = (series: FigureSeries, panel: Panel, layout: LineLayout): unknown[] => {
  const { style, xRange } = layout
  const color = seriesHex(series.role, style.mode, series.shade)
  const kept = decimate(series.x, series.y, xRange.low, xRange.high, Math.max(50, panel.box.width))
  const at = (i: number) => [toPixelX(layout, series.x[i] as number), toPixelY(panel, series.y[i] as number)] as const
  const shown = kept.filter((i) => Number.isFinite(at(i)[1]))
  const elements: unknown[] = []
  const sigma = series.uncertainty
  if (sigma) {
    const floor = panel.box.top + panel.box.height
    const bars = shown.map((i) => {
      const [x] = at(i)
      const low = toPixelY(panel, (series.y[i] as number) - (sigma[i] as number))
      return [
        x,
        Number.isFinite(low) ? low : floor,
        toPixelY(panel, (series.y[i] as number) + (sigma[i] as number)),
      ] as const
    })
    elements.push({
      type: 'path',
      silent: true,
      shape: { pathData: errorBarsPath(bars, style.pointRadius) },
      style: { fill: 'none', stroke: color, lineWidth: style.hairline, opacity: 0.55 },
    })
  }
  // Dense points shrink, so that a fast scan does not become a solid band.
  const crowded = shown.length > panel.box.width / 2
  elements.push({
    type: 'path',
    silent: true,
    shape: { pathData: discsPath(shown.map(at), crowded ? style.pointRadius * 0.7 : style.pointRadius) },
    style: { fill: color, stroke: 'none' },
  })
  return elements
}

const dashes = { solid: 'solid', dashed: [5, 3], dotted: [1.5, 2] } as const

const lineSeries = (series: FigureSeries, panel: Panel, layout: LineLayout, axis: { x: number; y: number }) => {
  const { style, xRange } = layout
  const kept = decimate(series.x, series.y, xRange.low, xRange.high, Math.max(50, panel.box.width))
  return {
    id: `line/${series.id}`,
    type: 'line',
    xAxisIndex: axis.x,
    yAxisIndex: axis.y,
    data: kept.map((i) => {
      const value = drawn(panel, series.y[i] as number)
      return [series.x[i] as number, Number.isFinite(value) ? value : '-']
    }),
    showSymbol: false,
    silent: true,
    animation: false,
    clip: true,
    connectNulls: false,
    emphasis: { disabled: true },
    lineStyle: {
      color: seriesHex(series.role, style.mode, series.shade),
      width: series.isStrong ? 1.7 * style.lineWidth : style.lineWidth,
      type: dashes[series.stroke ?? (series.role === 'secondary' ? 'dashed' : 'solid')],
      cap: 'butt',
      join: 'round',
    },
    z: series.isStrong ? 4 : 3,
  }
}

/** The echarts option of a line figure. The same description gives the page's canvas, the SVG and the PNG. */
export const lineFigureOption = (figure: LineFigure, frame: FigureFrame): ChartOption => {
  const layout = lineLayout(figure, frame)
  const { style, main, right, residual } = layout
  const labelGap = (panel: Panel) => panel.box.left - style.titleSize - 4
  const bottomGap = style.fontSize + 14
  const xAxis = [
    axisOption('x', 0, {
      range: layout.xRange,
      ticks: layout.xTicks,
      label: figure.xLabel,
      labelGap: bottomGap,
      showLabels: !residual,
      position: 'bottom',
      style,
    }),
  ]
  const y = (panel: Panel, grid: number, label: string, position: 'left' | 'right') =>
    axisOption('y', grid, {
      range: panel.yRange,
      ticks: panel.yTicks,
      label,
      labelGap:
        position === 'left' ? labelGap(panel) : frame.width - panel.box.left - panel.box.width - style.titleSize - 4,
      showLabels: true,
      position,
      style,
    })
  const yAxis = [y(main, 0, figure.yLabel, 'left')]
  const series: unknown[] = []
  const add = (panel: Panel, axis: { x: number; y: number }) => {
    for (const one of panel.series) {
      if (one.role === 'measurement')
        series.push(drawing(`points/${one.id}`, 2, axis, true, pointElements(one, panel, layout)))
      else series.push(lineSeries(one, panel, layout, axis))
    }
  }
  add(main, { x: 0, y: 0 })
  if (right) {
    yAxis.push(y(right, 0, figure.rightLabel ?? '', 'right'))
    add(right, { x: 0, y: yAxis.length - 1 })
  }
  series.push(drawing('frame', 5, { x: 0, y: 0 }, false, frameElements(main, right, layout)))
  const panels = right ? [main, right] : [main]
  const roles = new Map(figure.series.map((one) => [one.id, one]))
  const labels = placeCurveLabels(layout, panels).map((label) => {
    const one = roles.get(label.seriesId)
    return textElement(label.text, label.x, label.y, labelHex(one?.role ?? 'simulation', style.mode, one?.shade), style)
  })
  series.push(drawing('labels', 6, { x: 0, y: 0 }, false, labels))
  if (residual) {
    xAxis.push(
      axisOption('x', 1, {
        range: layout.xRange,
        ticks: layout.xTicks,
        label: figure.xLabel,
        labelGap: bottomGap,
        showLabels: true,
        position: 'bottom',
        style,
      }),
    )
    yAxis.push(y(residual, 1, figure.residualLabel ?? 'residual', 'left'))
    const axis = { x: 1, y: yAxis.length - 1 }
    const zero = toPixelY(residual, 0)
    const { left, width } = residual.box
    series.push(
      drawing('zero', 1, axis, true, [
        {
          type: 'line',
          silent: true,
          shape: { x1: left, y1: zero, x2: left + width, y2: zero },
          style: { stroke: style.ink, lineWidth: style.hairline, opacity: 0.6 },
        },
      ]),
    )
    for (const one of residual.series) {
      series.push(drawing(`points/${one.id}`, 2, axis, true, pointElements(one, residual, layout)))
    }
    series.push(drawing('residual-frame', 5, axis, false, frameElements(residual, null, layout)))
  }
  return {
    animation: false,
    backgroundColor: 'transparent',
    textStyle: { fontFamily },
    grid: residual ? [gridOption(main.box), gridOption(residual.box)] : [gridOption(main.box)],
    xAxis,
    yAxis,
    series,
  }
}
