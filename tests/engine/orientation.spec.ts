import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { isotropicFactor, linearPolarizations, type Vector } from '../../shared/engine/fine-structure/orientation'

const X: Vector = [1, 0, 0]
const Y: Vector = [0, 1, 0]
const dot = (u: Vector, v: Vector) => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]

/**
 * The definition: product of the four projections, averaged over all rotations. z-y-z Euler angles; trapezoid in the two
 * periodic ones and 5-point Gauss-Legendre in cos(beta) are exact for a polynomial of degree 4 in the rotation matrix.
 */
const averageOverRotations = (e: readonly Vector[], d: readonly Vector[]): number => {
  const nodes = [-0.906179845938664, -0.538469310105683, 0, 0.538469310105683, 0.906179845938664]
  const weights = [0.236926885056189, 0.478628670499366, 0.568888888888889, 0.478628670499366, 0.236926885056189]
  let total = 0
  const turns = 8
  for (let i = 0; i < turns; i++) {
    for (let j = 0; j < turns; j++) {
      nodes.forEach((cosB, index) => {
        const [a, g] = [(2 * Math.PI * i) / turns, (2 * Math.PI * j) / turns]
        const sinB = Math.sqrt(1 - cosB * cosB)
        const [ca, sa, cg, sg] = [Math.cos(a), Math.sin(a), Math.cos(g), Math.sin(g)]
        const rows: Vector[] = [
          [ca * cosB * cg - sa * sg, -ca * cosB * sg - sa * cg, ca * sinB],
          [sa * cosB * cg + ca * sg, -sa * cosB * sg + ca * cg, sa * sinB],
          [-sinB * cg, sinB * sg, cosB],
        ]
        const product = d.reduce((value, dipole, pulse) => {
          const rotated: Vector = [dot(rows[0]!, dipole), dot(rows[1]!, dipole), dot(rows[2]!, dipole)]
          return value * dot(e[pulse]!, rotated)
        }, 1)
        total += (weights[index]! / 2) * product
      })
    }
  }
  return total / turns ** 2
}

describe('isotropic orientational factor', () => {
  // Published averages for parallel dipoles: xxxx 1/5, xxyy = xyxy = xyyx 1/15 (r0 = 2/5).
  it('gives 1/5 and 1/15 for parallel dipoles', () => {
    const dipoles = [X, X, X, X] as const
    expect(isotropicFactor([X, X, X, X], dipoles)).toBeCloseTo(1 / 5, 15)
    for (const scheme of [
      [X, X, Y, Y],
      [X, Y, X, Y],
      [X, Y, Y, X],
    ] as const) {
      expect(isotropicFactor(scheme, dipoles)).toBeCloseTo(1 / 15, 15)
    }
  })

  // Dipoles a, a, b, b at an angle: xxxx (1 + 2 cos^2)/15; xxyy (2 - cos^2)/15; xyxy = xyyx (3 cos^2 - 1)/30; at 40
  // degrees .14490987851, .09421172741, .02534907555 (rotation quadrature, 14 digits).
  it('gives the values of two dipoles at 40 degrees', () => {
    const b: Vector = [Math.cos((40 * Math.PI) / 180), Math.sin((40 * Math.PI) / 180), 0]
    const dipoles = [X, X, b, b] as const
    expect(isotropicFactor([X, X, X, X], dipoles)).toBeCloseTo(0.14490987851, 10)
    expect(isotropicFactor([X, X, Y, Y], dipoles)).toBeCloseTo(0.09421172741, 10)
    expect(isotropicFactor([X, Y, X, Y], dipoles)).toBeCloseTo(0.02534907555, 10)
    expect(isotropicFactor([X, Y, Y, X], dipoles)).toBeCloseTo(0.02534907555, 10)
  })

  // At the magic angle of 54.7356 degrees the anisotropy vanishes: 1/9 whatever the angle between the dipoles.
  it('loses the angle between the dipoles at the magic angle', () => {
    const magic = linearPolarizations([0, 0, 54.735610317245346, 54.735610317245346])
    for (const degrees of [0, 30, 40, 90]) {
      const b: Vector = [Math.cos((degrees * Math.PI) / 180), 0, Math.sin((degrees * Math.PI) / 180)]
      expect(isotropicFactor(magic, [X, X, b, b])).toBeCloseTo(1 / 9, 12)
    }
  })

  // Weights of orthogonal equal dipoles in units of 1/30: [diagonal kkkk, kkll, klkl, kllk] for four presets.
  it.each([
    [
      [0, 0, 0, 0],
      [6, 2, 2, 2],
    ],
    [
      [0, 90, 0, 90],
      [2, -1, 4, -1],
    ],
    [
      [0, 90, 90, 0],
      [2, -1, -1, 4],
    ],
    [
      [0, 0, 90, 90],
      [2, 4, -1, -1],
    ],
  ] as const)('polarisations %j weigh orthogonal dipoles as %j / 30', (angles, expected) => {
    const e = linearPolarizations([...angles])
    const found = [
      [X, X, X, X],
      [X, X, Y, Y],
      [X, Y, X, Y],
      [X, Y, Y, X],
    ].map((dipoles) => 30 * isotropicFactor(e, dipoles as unknown as [Vector, Vector, Vector, Vector]))
    expected.forEach((value, index) => expect(found[index]).toBeCloseTo(value, 13))
  })

  it('crossing the second pulse alone gives exactly nothing', () => {
    const e = linearPolarizations([0, 90, 0, 0])
    expect(isotropicFactor(e, [X, X, X, X])).toBe(0)
    expect(isotropicFactor(e, [X, Y, X, Y])).toBe(0)
  })

  it('equals the average over rotations for any directions', () => {
    const unit = fc.tuple(
      fc.double({ min: -1, max: 1, noNaN: true }),
      fc.double({ min: -Math.PI, max: Math.PI, noNaN: true }),
    )
    const vectors = fc.array(unit, { minLength: 8, maxLength: 8 }).map((list) =>
      list.map(([z, phi]): Vector => {
        const across = Math.sqrt(1 - z * z)
        return [across * Math.cos(phi), across * Math.sin(phi), z]
      }),
    )
    fc.assert(
      fc.property(vectors, (list) => {
        const e = list.slice(0, 4) as unknown as [Vector, Vector, Vector, Vector]
        const d = list.slice(4) as unknown as [Vector, Vector, Vector, Vector]
        return Math.abs(isotropicFactor(e, d) - averageOverRotations(e, d)) < 1e-13
      }),
      { numRuns: 60 },
    )
  })
})
