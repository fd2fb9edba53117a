/**
 * Terms whose g0 oscillates for as long as one looks (a sharp sideband, a tabulated density), on uniform times: the panels
 * below ten radians over the whole range are smooth and become polynomials in time, the others are summed by the
 * non-uniform Fourier transform.
 * Source: `frequency-panels.ts` and `uniform-sums.ts`. Spec: tests/engine/compact-bath.spec.ts and tabulated-bath.spec.ts.
 */
import type { BathTerm } from '../schemas/parameter-set'
import { toContinuum } from './bath/registry'
import { buildFrequencyPanels } from './frequency-panels'
import { buildTimePanels } from './time-panels'
import type { LineBroadening } from './types'
import { addUniformSums, type UniformTimes } from './uniform-sums'

/** w t up to which a panel counts as smooth: less would make the weights J/w^2 of the sums large and their digits few. */
const SMOOTH_PHASE = 10

export const addOscillatingTerms = (
  bath: readonly BathTerm[],
  th: number,
  uniform: UniformTimes,
  times: Float64Array,
  re: Float64Array,
  im: Float64Array,
): Pick<LineBroadening, 'errorEstimate' | 'method'> | undefined => {
  if (bath.length === 0) return undefined
  const end = times[times.length - 1]!
  const panels = buildFrequencyPanels(bath.map(toContinuum), th, end)
  const split = panels.indexAbove(SMOOTH_PHASE / end)
  const start = times[0]! > 0 ? times[0]! : uniform.stepPs
  const evaluate = (time: number, out: Float64Array): void => panels.addAt(time, out, split)
  const slow = buildTimePanels(evaluate, { start, end, firstTime: end / 4 }, Infinity)!
  slow.addTo(times, re, im)
  const sums = addUniformSums(panels.nodesFrom(split, end), uniform, re, im)
  return {
    errorEstimate: panels.errorEstimate + slow.errorEstimate + sums,
    method: 'Legendre panels in frequency, non-uniform Fourier transform',
  }
}
