import Complex from 'complex.js'
import { describe, expect, it } from 'vitest'
import { besselIScaled } from '../../shared/engine/bessel-i'
import { digamma, hurwitzZeta, logGamma, trigamma } from '../../shared/engine/complex-functions'
import { scaledE1, scaledEi } from '../../shared/engine/exponential-integral'
import { dawson, faddeeva } from '../../shared/engine/faddeeva'
import { gamma } from '../../shared/engine/gamma'
import { sphericalBessel } from '../../shared/engine/spherical-bessel'
import reference from './reference/line-shape-values.json'
import fixture from './reference/special-functions.json'

type Pair = [number, number]
interface Case {
  function: string
  order?: number
  argument: Pair
  value: Pair
}

const pairOf = (z: InstanceType<typeof Complex>): Pair => [z.re, z.im]
const complex = ([re, im]: Pair) => new Complex(re, im)

const functions: Record<string, (argument: Pair, order: number) => Pair> = {
  logGamma: (z) => pairOf(logGamma(complex(z))),
  digamma: (z) => pairOf(digamma(complex(z))),
  trigamma: (z) => pairOf(trigamma(complex(z))),
  hurwitzZeta: (z, s) => pairOf(hurwitzZeta(s, complex(z))),
  faddeeva: ([x, y]) => {
    const out = new Float64Array(2)
    faddeeva(x, y, out)
    return [out[0]!, out[1]!]
  },
  dawson: ([x]) => [dawson(x), 0],
  gamma: ([x]) => [gamma(x), 0],
  scaledE1: ([y]) => [scaledE1(y), 0],
  scaledEi: ([y]) => [scaledEi(y), 0],
  besselI: ([z], m) => [besselIScaled(m + 3, z)[m]!, 0],
  sphericalBessel: ([x], n) => {
    const out = new Float64Array(20)
    sphericalBessel(x, 20, out)
    return [out[n]!, 0]
  },
}

/** Bounds are about four times the largest error found; where it is compared with 1, the function has zeros. */
const bounds: Record<string, { bound: number; floor: number }> = {
  logGamma: { bound: 4e-14, floor: 1 },
  digamma: { bound: 5e-15, floor: 1 },
  trigamma: { bound: 2e-15, floor: 0 },
  hurwitzZeta: { bound: 2e-14, floor: 1 },
  faddeeva: { bound: 3e-15, floor: 0 },
  dawson: { bound: 3e-15, floor: 0 },
  gamma: { bound: 1e-14, floor: 0 },
  scaledE1: { bound: 2e-14, floor: 0 },
  scaledEi: { bound: 2e-14, floor: 0.1 },
  besselI: { bound: 4e-15, floor: 0 },
  sphericalBessel: { bound: 5e-16, floor: 1 },
}

const errorOf = (found: Pair, expected: Pair, floor: number): number => {
  const distance = Math.hypot(found[0] - expected[0], found[1] - expected[1])
  // Both underflow to 0 far out in I_m(z).
  return distance === 0 ? 0 : distance / Math.max(floor, Math.hypot(...expected))
}

describe('special functions against mpmath', () => {
  const cases = fixture.cases as Case[]
  for (const [name, { bound, floor }] of Object.entries(bounds)) {
    it(`${name} keeps its error below ${bound}`, () => {
      const own = cases.filter((entry) => entry.function === name)
      expect(own.length).toBeGreaterThan(7)
      const errors = own.map((entry) => errorOf(functions[name]!(entry.argument, entry.order ?? 0), entry.value, floor))
      const worst = errors.indexOf(Math.max(...errors))
      expect(
        errors.every((error) => error <= bound),
        `${JSON.stringify(own[worst])}: ${errors[worst]}`,
      ).toBe(true)
    })
  }

  it('w(z) equals the reference values (twelve digits)', () => {
    expect(reference.faddeeva_w).toHaveLength(5)
    for (const [text, value] of reference.faddeeva_w as [string, Pair][]) {
      const [, re, im = '0'] = /^\(?([\d.e-]+)(?:\+([\d.e-]+)j)?\)?$/.exec(text)!
      expect(errorOf(functions.faddeeva!([Number(re), Number(im)], 0), value, 0)).toBeLessThan(1e-11)
    }
  })

  it('never overflows where the factors of w(z) would', () => {
    const out = new Float64Array(2)
    faddeeva(1e-3, 200, out)
    // Leading terms of the asymptotic series, w(iy) = 1/(sqrt(pi) y) (1 - 1/(2 y^2) + ...): NIST Handbook (2010), 7.12.1.
    expect(out[0]).toBeCloseTo((1 - 1 / 80000) / (Math.sqrt(Math.PI) * 200), 11)
    faddeeva(1e8, 0, out)
    expect(out.every(Number.isFinite)).toBe(true)
  })
})
