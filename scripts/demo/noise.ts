/**
 * Seeded noise, the same on every machine. Uniform numbers: mulberry32 (T. Ettinger, 2017, public domain); normal ones:
 * G. E. P. Box, M. E. Muller, Ann. Math. Stat. 29, 610 (1958).
 */
export const seededUniform = (seed: number): (() => number) => {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state)
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32
  }
}

export const seededNormal = (seed: number): (() => number) => {
  const uniform = seededUniform(seed)
  return () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform())
}
