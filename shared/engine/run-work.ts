import type { SpectralGrid } from './grid'

/** Rough work of one temperature, in units of one multiplication; only ratios matter, for honest progress. */
export const workOf = (grid: SpectralGrid, kind: 'linear' | 'map'): number => {
  const { samples, paddedSamples, halfBins } = grid
  const transform = 5 * paddedSamples * Math.log2(paddedSamples)
  if (kind === 'linear') return 3000 * samples + transform
  return 6000 * samples + 2 * (samples + 2 * halfBins) * transform + 20 * samples * samples + 60 * (2 * halfBins) ** 2
}
