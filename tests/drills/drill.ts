/** Seed of this drill's random choices, printed so that a run can be repeated. */
export const seed = Number(process.env.DRILL_SEED ?? 1)
export const isFull = process.env.DRILL_FULL === '1'

/** mulberry32: small, seeded, good enough to pick victims. */
export const makeRandom = (start: number): (() => number) => {
  let state = start >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let mixed = Math.imul(state ^ (state >>> 15), state | 1)
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61)
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32
  }
}

export const print = (name: string, figures: Record<string, unknown>): void =>
  console.log(`${name}: ${JSON.stringify(figures)}`)

export const quantile = (values: readonly number[], fraction: number): number => {
  const sorted = [...values].sort((a, b) => a - b)
  return sorted[Math.min(sorted.length - 1, Math.floor(fraction * sorted.length))] ?? Number.NaN
}
