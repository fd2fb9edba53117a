import { bisectCenter } from 'd3-array'
import type { FigureSeries } from '#shared/figure/line-description'
import type { Range } from '#shared/figure/ticks'

/** Steps across the visible range that one press of an arrow key makes. */
const stepsAcross = 200

/** The place at which a figure of curves is being read: a curve and an index on it, moved by pointer or keys. */
export const useCurveReading = (curves: ComputedRef<readonly FigureSeries[]>) => {
  const seriesId = ref<string | null>(null)
  const at = ref<number | null>(null)

  const series = computed(() => curves.value.find((one) => one.id === seriesId.value) ?? curves.value[0])
  const place = computed(() => {
    if (at.value === null || !series.value) return null
    const index = bisectCenter(series.value.x, at.value)
    return { series: series.value, index, x: series.value.x[index] as number, y: series.value.y[index] as number }
  })

  const clear = () => {
    at.value = null
  }

  /** Reads at x, on the curve that lies nearest by the given measure. */
  const moveTo = (x: number, distance: (one: FigureSeries, y: number) => number) => {
    at.value = x
    let best = Infinity
    for (const one of curves.value) {
      const far = distance(one, one.y[bisectCenter(one.x, x)] as number)
      if (far < best) {
        best = far
        seriesId.value = one.id
      }
    }
  }

  const moveBy = (direction: number, range: Range) => {
    const one = series.value
    if (!one) return
    if (!place.value) {
      at.value = (range.low + range.high) / 2
      return
    }
    const stride = (direction * (range.high - range.low)) / stepsAcross
    const bounded = Math.min(range.high, Math.max(range.low, place.value.x + stride))
    // On a coarse curve one press still moves by one point.
    const next = bisectCenter(one.x, bounded)
    const index = next === place.value.index ? next + Math.sign(direction) : next
    const x = one.x[index]
    if (x !== undefined && x >= range.low && x <= range.high) at.value = x
  }

  const switchCurve = (by: number, range: Range) => {
    const count = curves.value.length
    if (count === 0) return
    const here = series.value ? curves.value.indexOf(series.value) : 0
    seriesId.value = curves.value[(here + by + count) % count]?.id ?? null
    at.value ??= (range.low + range.high) / 2
  }

  /** Acts on a key of the figure; true when the key was one of its own. */
  const key = (name: string, isFast: boolean, range: Range): boolean => {
    const pace = isFast ? 10 : 1
    if (name === 'ArrowRight') moveBy(pace, range)
    else if (name === 'ArrowLeft') moveBy(-pace, range)
    else if (name === 'ArrowDown') switchCurve(1, range)
    else if (name === 'ArrowUp') switchCurve(-1, range)
    else if (name === 'Home') at.value = range.low
    else if (name === 'End') at.value = range.high
    else if (name === 'Escape') clear()
    else return false
    return true
  }

  return { place, moveTo, key, clear }
}
