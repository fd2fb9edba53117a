import { contourLevels, traceContours } from './contour-paths'
import type { FigureFrame } from './line-description'
import { axisOption, drawing, gridOption, type ChartOption } from './line-figure'
import { contourable, halve, paintable, visiblePart, type MapPart } from './map-data'
import type { MapFigure } from './map-description'
import { paintBar, paintMap, type IndexedImage } from './map-image'
import { edgePaths } from './map-edges'
import { mapLayout, toBarPixel, toMapPixel, type MapLayout } from './map-layout'
import { seriesHex } from './palette'
import { framePath, lineTo, moveTo, tickPath } from './paths'
import { fontFamily, plainLabel, textWidth } from './style'
import { labelWithFactor } from './ticks'

/** Makes what the renderer draws from an image: a canvas in the page, a data address in files and on the server. */
export type ImageSource = (image: IndexedImage) => unknown

export const defaultContourSteps = 10

const imageElement = (image: unknown, left: number, top: number, width: number, height: number) => ({
  type: 'image',
  silent: true,
  style: { image, x: left, y: top, width, height },
})

/** Pixel centres stand at the samples, so the image reaches half a step beyond the first and the last one. */
const mapImage = (part: MapPart, layout: MapLayout, figure: MapFigure, toImage: ImageSource) => {
  // Interpolated as it is, then compressed: the other way round, sign changes would show the grid.
  const isCompressed = figure.scale === 'asinh'
  const dense = paintable(part, layout.box.width, isCompressed ? 2 : 1)
  const shares = { ...dense, values: dense.values.map(layout.values.toShare) }
  const fine = isCompressed ? halve(shares) : shares
  const image = toImage(paintMap(fine, { low: figure.signed ? -1 : 0, high: 1 }, figure.signed, layout.style.mode))
  const topLeft = toMapPixel(layout, {
    energy1: fine.start1 - fine.step1 / 2,
    energy3: fine.start3 + (fine.count3 - 0.5) * fine.step3,
  })
  const bottomRight = toMapPixel(layout, {
    energy1: fine.start1 + (fine.count1 - 0.5) * fine.step1,
    energy3: fine.start3 - fine.step3 / 2,
  })
  return imageElement(image, topLeft.x, topLeft.y, bottomRight.x - topLeft.x, bottomRight.y - topLeft.y)
}

/** Contours as one path a sign: solid above zero, dashed below. */
const contourElements = (part: MapPart, layout: MapLayout, figure: MapFigure): unknown[] => {
  const steps = figure.contourSteps ?? defaultContourSteps
  const coarse = contourable(part)
  const levels = contourLevels(1, steps, figure.signed).map(layout.values.fromShare)
  const paths = { above: '', below: '' }
  for (const { level, lines } of traceContours(coarse, levels)) {
    const side = level < 0 ? 'below' : 'above'
    for (const line of lines) {
      line.forEach(([along1, along3], index) => {
        const { x, y } = toMapPixel(layout, {
          energy1: coarse.start1 + along1 * coarse.step1,
          energy3: coarse.start3 + along3 * coarse.step3,
        })
        paths[side] += index === 0 ? moveTo(x, y) : lineTo(x, y)
      })
    }
  }
  return (['above', 'below'] as const)
    .filter((side) => paths[side] !== '')
    .map((side) => ({
      type: 'path',
      silent: true,
      shape: { pathData: paths[side] },
      style: {
        fill: 'none',
        stroke: layout.style.ink,
        lineWidth: 0.6,
        opacity: 0.5,
        ...(side === 'below' ? { lineDash: [3, 2] } : {}),
      },
    }))
}

const diagonalElement = (layout: MapLayout) => {
  const low = Math.max(layout.range1.low, layout.range3.low)
  const high = Math.min(layout.range1.high, layout.range3.high)
  const from = toMapPixel(layout, { energy1: low, energy3: low })
  const to = toMapPixel(layout, { energy1: high, energy3: high })
  return {
    type: 'line',
    silent: true,
    ignore: !(high > low),
    shape: { x1: from.x, y1: from.y, x2: to.x, y2: to.y },
    style: { stroke: layout.style.ink, lineWidth: layout.style.hairline, lineDash: [6, 3], opacity: 0.75 },
  }
}

const edgeElements = (layout: MapLayout, figure: MapFigure): unknown[] => {
  if (!layout.edges || !figure.place) return []
  const { style } = layout
  const paths = edgePaths(figure, layout, figure.place)
  const path = (pathData: string, pen: object) => ({
    type: 'path',
    silent: true,
    ignore: pathData === '',
    shape: { pathData },
    style: { fill: 'none', ...pen },
  })
  const curve = { stroke: seriesHex('simulation', style.mode), lineWidth: style.lineWidth }
  return [
    path(paths.zero, { stroke: style.ink, lineWidth: style.hairline, opacity: 0.4 }),
    path(paths.top, curve),
    path(paths.right, curve),
  ]
}

const placeElements = (layout: MapLayout, figure: MapFigure): unknown[] => {
  if (!figure.place) return []
  const { x, y } = toMapPixel(layout, figure.place)
  const { left, top, width, height } = layout.box
  const pen = { stroke: layout.style.ink, lineWidth: layout.style.hairline }
  return [
    { type: 'line', silent: true, shape: { x1: x, y1: top, x2: x, y2: top + height }, style: pen },
    { type: 'line', silent: true, shape: { x1: left, y1: y, x2: left + width, y2: y }, style: pen },
  ]
}

const frameElements = (layout: MapLayout): unknown[] => {
  const { box, bar, style, ticks1, ticks3, values } = layout
  const pen = { fill: 'none', stroke: style.ink, lineWidth: style.hairline }
  const xs = (list: number[]) => list.map((energy1) => toMapPixel(layout, { energy1, energy3: 0 }).x)
  const ys = (list: number[]) => list.map((energy3) => toMapPixel(layout, { energy1: 0, energy3 }).y)
  const onBar = values.ticks.major.map((value) => toBarPixel(layout, value))
  const none = { major: [], minor: [] }
  const sides = { major: ys(ticks3.major), minor: ys(ticks3.minor) }
  const mapTicks = { x: { major: xs(ticks1.major), minor: xs(ticks1.minor) }, left: sides, right: sides }
  const barTicks = { x: none, left: none, right: { major: onBar, minor: [] } }
  const path = (pathData: string) => ({ type: 'path', silent: true, shape: { pathData }, style: pen })
  return [
    path(framePath(box)),
    path(tickPath(box, mapTicks, style)),
    path(framePath(bar)),
    ...(layout.edges ? [path(framePath(layout.edges.top)), path(framePath(layout.edges.right))] : []),
    path(tickPath(bar, barTicks, { tickLength: 4, minorTickLength: 0 })),
  ]
}

const barLabels = (layout: MapLayout, figure: MapFigure): unknown[] => {
  const { bar, style } = layout
  const { ticks } = layout.values
  const font = { fill: style.ink, font: `${style.fontSize}px ${fontFamily}`, textVerticalAlign: 'middle' }
  const texts = ticks.major.map((value, k) => ({
    type: 'text',
    silent: true,
    style: {
      ...font,
      text: ticks.labels[k] ?? '',
      x: bar.left + bar.width + 6,
      y: toBarPixel(layout, value),
      textAlign: 'left',
    },
  }))
  const label = labelWithFactor(figure.valueLabel ?? '', ticks.factorExponent)
  if (!label) return texts
  const widest = Math.max(0, ...ticks.labels.map((text) => 1.1 * textWidth(text, style.fontSize)))
  return [
    ...texts,
    {
      type: 'text',
      silent: true,
      x: bar.left + bar.width + 6 + widest + 8 + style.titleSize / 2,
      y: bar.top + bar.height / 2,
      rotation: Math.PI / 2,
      style: {
        ...font,
        font: `${style.titleSize}px ${fontFamily}`,
        text: plainLabel(label),
        textAlign: 'center',
      },
    },
  ]
}

/** The echarts option of a map: one painted image, contour paths, diagonal, colour bar and marked place over it. */
export const mapFigureOption = (figure: MapFigure, frame: FigureFrame, toImage: ImageSource): ChartOption => {
  const layout = mapLayout(figure, frame)
  const { box, bar, style } = layout
  const part = visiblePart(figure)
  const axis = { x: 0, y: 0 }
  const isEmpty = part.count1 < 2 || part.count3 < 2
  return {
    animation: false,
    backgroundColor: 'transparent',
    textStyle: { fontFamily },
    grid: [gridOption(box)],
    xAxis: [
      axisOption('x', 0, {
        range: layout.range1,
        ticks: layout.ticks1,
        label: figure.xLabel,
        labelGap: style.fontSize + 14,
        showLabels: true,
        position: 'bottom',
        style,
      }),
    ],
    yAxis: [
      axisOption('y', 0, {
        range: layout.range3,
        ticks: layout.ticks3,
        label: figure.yLabel,
        labelGap: box.left - style.titleSize - 4,
        showLabels: true,
        position: 'left',
        style,
      }),
    ],
    series: [
      drawing('map', 1, axis, true, isEmpty ? [] : [mapImage(part, layout, figure, toImage)]),
      drawing('contours', 2, axis, true, isEmpty ? [] : contourElements(part, layout, figure)),
      drawing('diagonal', 3, axis, true, [diagonalElement(layout)]),
      drawing('place', 4, axis, true, placeElements(layout, figure)),
      drawing('edges', 4, axis, false, edgeElements(layout, figure)),
      drawing('bar', 4, axis, false, [
        imageElement(toImage(paintBar(figure.signed, style.mode)), bar.left, bar.top, bar.width, bar.height),
      ]),
      drawing('frame', 5, axis, false, frameElements(layout)),
      drawing('bar-labels', 6, axis, false, barLabels(layout, figure)),
    ],
  }
}
