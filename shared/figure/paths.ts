import type { Box } from './line-layout'
import type { FigureStyle } from './style'

/** SVG path data in CSS pixels, which both of the renderers take. */

const round = (value: number): number => Math.round(value * 100) / 100

export const moveTo = (x: number, y: number): string => `M${round(x)} ${round(y)}`
export const lineTo = (x: number, y: number): string => `L${round(x)} ${round(y)}`

export const framePath = (box: Box): string =>
  moveTo(box.left, box.top) +
  lineTo(box.left + box.width, box.top) +
  lineTo(box.left + box.width, box.top + box.height) +
  lineTo(box.left, box.top + box.height) +
  'Z'

/** Ticks of a frame, all inward. Positions in pixels; both sides of the frame carry them unless one side is left out. */
export const tickPath = (
  box: Box,
  ticks: {
    x: { major: number[]; minor: number[] }
    left: { major: number[]; minor: number[] }
    right: { major: number[]; minor: number[] }
  },
  style: Pick<FigureStyle, 'tickLength' | 'minorTickLength'>,
): string => {
  const { left, top } = box
  const right = left + box.width
  const bottom = top + box.height
  let path = ''
  const along = (positions: number[], low: number, high: number, draw: (at: number) => void) => {
    for (const at of positions) if (at >= low - 0.5 && at <= high + 0.5) draw(at)
  }
  for (const [kind, length] of [
    ['major', style.tickLength],
    ['minor', style.minorTickLength],
  ] as const) {
    along(ticks.x[kind], left, right, (x) => {
      path += moveTo(x, bottom) + lineTo(x, bottom - length) + moveTo(x, top) + lineTo(x, top + length)
    })
    along(ticks.left[kind], top, bottom, (y) => {
      path += moveTo(left, y) + lineTo(left + length, y)
    })
    along(ticks.right[kind], top, bottom, (y) => {
      path += moveTo(right, y) + lineTo(right - length, y)
    })
  }
  return path
}

/** Discs as one path: thousands of measured points stay one element. */
export const discsPath = (points: Iterable<readonly [number, number]>, radius: number): string => {
  let path = ''
  const r = round(radius)
  for (const [x, y] of points) {
    path += `${moveTo(x - r, y)}a${r} ${r} 0 1 0 ${2 * r} 0a${r} ${r} 0 1 0 ${-2 * r} 0Z`
  }
  return path
}

/** Vertical error bars with short caps. */
export const errorBarsPath = (bars: Iterable<readonly [x: number, low: number, high: number]>, cap: number): string => {
  let path = ''
  for (const [x, low, high] of bars) {
    path += moveTo(x, low) + lineTo(x, high)
    path += moveTo(x - cap, low) + lineTo(x + cap, low) + moveTo(x - cap, high) + lineTo(x + cap, high)
  }
  return path
}
