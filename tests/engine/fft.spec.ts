import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fftPlan, forwardFft, inverseFft, nextPowerOfTwo } from '../../shared/engine/fft'
import { largest } from './support'

/** The definition, one sum per bin. */
const plainTransform = (re: Float64Array, im: Float64Array, sign: number) => {
  const n = re.length
  const out = { re: new Float64Array(n), im: new Float64Array(n) }
  for (let k = 0; k < n; k++) {
    for (let j = 0; j < n; j++) {
      const angle = (sign * 2 * Math.PI * ((j * k) % n)) / n
      out.re[k]! += re[j]! * Math.cos(angle) - im[j]! * Math.sin(angle)
      out.im[k]! += re[j]! * Math.sin(angle) + im[j]! * Math.cos(angle)
    }
  }
  return out
}

const sample = (n: number, seed: number) => ({
  re: Float64Array.from({ length: n }, (_, j) => Math.sin(1.3 * j * j + seed)),
  im: Float64Array.from({ length: n }, (_, j) => Math.cos(0.7 * j + seed * j)),
})

describe('fft', () => {
  it.each([1, 2, 4, 8, 16, 32, 128, 512, 1024])('equals the plain sum at length %i, both signs', (n) => {
    for (const [transform, sign] of [
      [forwardFft, -1],
      [inverseFft, 1],
    ] as const) {
      const { re, im } = sample(n, 0.4)
      const expected = plainTransform(re, im, sign)
      transform(re, im)
      const error = largest(re.map((value, k) => Math.hypot(value - expected.re[k]!, im[k]! - expected.im[k]!)))
      // Largest possible value n; the plain sum itself rounds to about 1e-16 n sqrt(n).
      expect(error).toBeLessThan(2e-15 * n)
    }
  })

  it('comes back after forward and inverse', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 15 }), fc.double({ min: 0, max: 6, noNaN: true }), (power, seed) => {
        const n = 2 ** power
        const { re, im } = sample(n, seed)
        const before = re.slice()
        forwardFft(re, im)
        inverseFft(re, im)
        // Up to 30 stages round; 10 epsilon (2.2e-15) is the most that was seen, and 16 leave room for rarer draws.
        expect(largest(re.map((value, j) => Math.abs(value / n - before[j]!)))).toBeLessThan(16 * Number.EPSILON)
      }),
      { numRuns: 30 },
    )
  })

  it('refuses other lengths by name', () => {
    for (const length of [0, 3, 12, 1.5, 2 ** 27]) {
      expect(() => fftPlan(length)).toThrow(`found ${length}`)
    }
    expect([1, 2, 3, 4, 5, 1000].map(nextPowerOfTwo)).toEqual([1, 2, 4, 4, 8, 1024])
  })
})
