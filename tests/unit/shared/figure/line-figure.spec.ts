import { describe, expect, it } from 'vitest'
import { placeCurveLabels } from '../../../../shared/figure/curve-labels'
import { lineFigureOption } from '../../../../shared/figure/line-figure'
import { fromPixelX, lineLayout, toPixelX, toPixelY } from '../../../../shared/figure/line-layout'
import { seriesHex } from '../../../../shared/figure/palette'
import { textWidth } from '../../../../shared/figure/style'
import { summarizeLines } from '../../../../shared/figure/summary'
import { rounded, sampleLines } from './sample-figures'

const frame = { width: 640, height: 420, mode: 'light' as const }

interface Series {
  id: string
  type: string
  data: [number, number | string][]
  lineStyle?: { color: string }
  renderItem?: () => { children: { type: string; style: Record<string, unknown>; shape?: { pathData: string } }[] }
}
const seriesOf = (figure = sampleLines()) => lineFigureOption(figure, frame).series as Series[]

describe('option of a figure of curves', () => {
  it('is what it was, after rounding', () => {
    const option = lineFigureOption(sampleLines(), frame)
    expect(rounded({ grid: option.grid, xAxis: option.xAxis, yAxis: option.yAxis })).toMatchSnapshot()
    const drawn = (option.series as Series[]).map((one) => ({
      ...one,
      data: rounded(one.data),
      renderItem: rounded(one.renderItem?.().children.map((child) => ({ type: child.type, style: child.style }))),
    }))
    expect(rounded(drawn)).toMatchSnapshot()
  })

  it('draws simulations as lines and measurements as points with error bars, each in its colour', () => {
    const series = seriesOf()
    const lines = series.filter((one) => one.type === 'line')
    expect(lines.map((one) => one.lineStyle?.color)).toEqual([
      seriesHex('simulation', 'light', 0),
      seriesHex('simulation', 'light', 1),
    ])
    const [bars, points] = series.find((one) => one.id === 'points/measured')?.renderItem?.().children ?? []
    expect(points?.style.fill).toBe(seriesHex('measurement', 'light'))
    expect(points?.shape?.pathData.match(/M/g)).toHaveLength(21)
    expect(bars?.style.stroke).toBe(seriesHex('measurement', 'light'))
    expect(bars?.shape?.pathData.match(/M/g)).toHaveLength(3 * 21)
  })

  it('leaves a gap on a logarithmic axis where there is no logarithm', () => {
    const figure = sampleLines({ scale: 'log' })
    const cold = figure.series[0]
    if (!cold) throw new Error('expected a first curve')
    const y = cold.y.slice()
    y[10] = 0
    y[11] = -1
    const line = seriesOf({ ...figure, series: [{ ...cold, y }] }).find((one) => one.type === 'line')
    expect(line?.data[10]?.[1]).toBe('-')
    expect(line?.data[11]?.[1]).toBe('-')
    expect(line?.data[12]?.[1]).toBeCloseTo(Math.log10(y[12] as number), 12)
  })

  it('has no residual panel without residuals, and a right axis with a curve that asks for it', () => {
    const figure = sampleLines()
    const curves = figure.series.filter((one) => one.role !== 'residual')
    expect(lineFigureOption({ ...figure, series: curves }, frame).grid).toHaveLength(1)
    const [first, ...others] = curves
    if (!first) throw new Error('expected a first curve')
    const option = lineFigureOption(
      { ...figure, rightLabel: 'density (meV)', series: [{ ...first, axis: 'right' }, ...others] },
      frame,
    )
    expect((option.yAxis as { position: string }[]).map((axis) => axis.position)).toEqual(['left', 'right'])
  })

  it('stays finite for empty, single-point, constant and unknown values', () => {
    const odd = [
      { x: [], y: [] },
      { x: [5], y: [1] },
      { x: [1, 2, 3], y: [0, 0, 0] },
      { x: [1, 2, 3], y: [NaN, NaN, NaN] },
      { x: [1, 2, 3], y: [-1, -2, -3] },
    ]
    for (const scale of ['linear', 'log'] as const) {
      for (const { x, y } of odd) {
        const figure = sampleLines({
          scale,
          series: [
            { id: 'a', label: 'a', role: 'simulation', x: Float64Array.from(x), y: Float64Array.from(y) },
            { id: 'b', label: 'b', role: 'measurement', x: Float64Array.from(x), y: Float64Array.from(y) },
          ],
        })
        const { xRange, main } = lineLayout(figure, frame)
        expect(xRange.high).toBeGreaterThan(xRange.low)
        expect(main.yRange.high).toBeGreaterThan(main.yRange.low)
        expect(JSON.stringify(lineFigureOption(figure, frame))).not.toMatch(/NaN|Infinity/)
        expect(summarizeLines(figure)).not.toContain('undefined')
      }
    }
  })
})

describe('layout', () => {
  it('maps energies to pixels and back', () => {
    const layout = lineLayout(sampleLines(), frame)
    expect(fromPixelX(layout, toPixelX(layout, 1999.25))).toBeCloseTo(1999.25, 9)
    expect(toPixelX(layout, layout.xRange.low)).toBe(layout.main.box.left)
  })

  it('shows at most the asked decades below the maximum', () => {
    const layout = lineLayout(sampleLines({ scale: 'log', decades: 2 }), frame)
    expect(layout.main.yRange.high - layout.main.yRange.low).toBeLessThan(2.2)
  })
})

describe('labels at curves', () => {
  it('stand apart from one another, inside the frame, near their own curve', () => {
    const figure = sampleLines()
    const layout = lineLayout(figure, frame)
    const labels = placeCurveLabels(layout, [layout.main])
    expect(labels.map((label) => label.text)).toEqual(['4 K', '300 K', 'measured'])
    const boxes = labels.map((label) => ({
      left: label.x,
      right: label.x + textWidth(label.text, layout.style.fontSize),
      top: label.y - 6,
      bottom: label.y + 6,
    }))
    boxes.forEach((a, i) => {
      expect(a.left).toBeGreaterThan(layout.main.box.left)
      expect(a.right).toBeLessThan(layout.main.box.left + layout.main.box.width)
      boxes.slice(i + 1).forEach((b) => {
        expect(a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom).toBe(false)
      })
      const series = figure.series[i]
      if (!series) throw new Error('expected a series for each label')
      const nearest = Math.min(
        ...Array.from(series.x, (x, k) => {
          const dx = Math.max(a.left - toPixelX(layout, x), toPixelX(layout, x) - a.right, 0)
          const dy = toPixelY(layout.main, series.y[k] as number) - (a.top + 6)
          return Math.hypot(dx, dy)
        }),
      )
      expect(nearest).toBeLessThan(20)
    })
  })

  it('are thinned evenly when there are more curves than a reader can tell apart', () => {
    const [curve] = sampleLines().series
    if (!curve) throw new Error('expected a curve')
    const series = Array.from({ length: 40 }, (_, k) => ({
      ...curve,
      id: `t${k}`,
      label: `${k} K`,
      y: curve.y.map((value) => value * (1 + k / 10)),
    }))
    const layout = lineLayout(sampleLines({ series }), frame)
    const labels = placeCurveLabels(layout, [layout.main]).map((label) => label.text)
    expect(labels).toHaveLength(9)
    expect(labels).toContain('0 K')
    expect(labels).toContain('39 K')
  })
})

describe('summary', () => {
  it('says what is shown, with units', () => {
    expect(summarizeLines(sampleLines({ scale: 'log' }))).toBe(
      'absorption against photon energy, logarithmic. 4 K (simulation): maximum 0.1592 1/meV at 2000 meV; ' +
        '300 K (simulation): maximum 0.06366 1/meV at 2000 meV; measured (measurement): maximum 0.1612 1/meV at 2000 meV. ' +
        'With a residual panel.',
    )
    expect(summarizeLines(sampleLines({ series: [] }))).toContain('nothing to show yet')
  })
})
