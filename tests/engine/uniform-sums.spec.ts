import { describe, expect, it } from 'vitest'
import { addUniformSums } from '../../shared/engine/uniform-sums'
import { largest } from './support'

/** Reproducible numbers in (0, 1): minimal standard generator, seed 7 (Park & Miller, Commun. ACM 31, 1192 (1988)). */
const generator = () => {
  let state = 7
  return () => (state = (state * 48271) % 2147483647) / 2147483647
}

const error = (count: number, highest: number, times: { startPs: number; stepPs: number; samples: number }) => {
  const random = generator()
  const frequencies = Float64Array.from({ length: count }, () => highest * random())
  const thermal = frequencies.map(() => random() - 0.2)
  const vacuum = frequencies.map(() => random() - 0.2)
  const re = new Float64Array(times.samples)
  const im = new Float64Array(times.samples)
  const bound = addUniformSums({ frequencies, thermal, vacuum }, times, re, im)
  const errors = Array.from(re, (_, j) => {
    const t = times.startPs + j * times.stepPs
    let a = 0
    let b = 0
    for (let m = 0; m < count; m++) {
      a += thermal[m]! * 2 * Math.sin((frequencies[m]! * t) / 2) ** 2
      b += vacuum[m]! * Math.sin(frequencies[m]! * t)
    }
    return Math.hypot(re[j]! - a, im[j]! - b)
  })
  return { error: largest(errors), bound }
}

describe('sums over many frequencies at uniform times', () => {
  for (const [name, count, highest, times] of [
    ['a fine grid from 0', 500, 40, { startPs: 0, stepPs: 0.01, samples: 1024 }],
    ['an odd number of times', 300, 40, { startPs: 0, stepPs: 0.01, samples: 777 }],
    ['a range far from 0', 300, 40, { startPs: 300, stepPs: 0.02, samples: 512 }],
    ['a grid so coarse that frequencies fold', 300, 900, { startPs: 0, stepPs: 0.5, samples: 512 }],
    ['very few times', 50, 40, { startPs: 0.3, stepPs: 0.1, samples: 3 }],
  ] as const) {
    it(`${name}: equal the plain sums within the stated bound`, () => {
      const found = error(count, highest, times)
      expect(found.error).toBeLessThan(found.bound)
      // The bound is honest, not generous: the plain sums round at 1e-16 of the whole too.
      const phase = highest * (times.startPs + times.samples * times.stepPs)
      expect(found.bound).toBeLessThan((1e-13 + 3e-16 * phase) * 2.1 * count)
    })
  }
})
