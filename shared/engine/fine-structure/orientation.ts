/**
 * Orientational average of a four-wave-mixing signal over an isotropic sample.
 *
 *   p(abcd) = (1/30) F^T M G,  M = [[4,-1,-1],[-1,4,-1],[-1,-1,4]]
 *   F = [(e1.e2)(e3.e4), (e1.e3)(e2.e4), (e1.e4)(e2.e3)],  G the same of the dipoles a, b, c, d
 *
 * Order everywhere: pulse 1, pulse 2, pulse 3, detection. Real (linear) polarisations only: circular light needs the complex
 * products with the detection and the pulse of wave vector -k conjugated.
 * Source: Craig & Thirunamachandran, Molecular Quantum Electrodynamics (1984), appendix 2; checked against a rotation
 * quadrature in tests/engine/orientation.spec.ts.
 */

export type Vector = readonly [number, number, number]

/** Three dot products of four real vectors, in the order of the pairings above. */
const pairings = (a: Vector, b: Vector, c: Vector, d: Vector): Vector => {
  const dot = (u: Vector, v: Vector) => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]
  return [dot(a, b) * dot(c, d), dot(a, c) * dot(b, d), dot(a, d) * dot(b, c)]
}

/** Linear polarisations in the plane across the beam, given as four angles in degrees. */
export const linearPolarizations = (anglesDeg: readonly [number, number, number, number]) =>
  anglesDeg.map((angle): Vector => {
    // Exact at the quarter turns, so that crossed schemes have exact zeros.
    const quarter = angle / 90
    if (Number.isInteger(quarter)) {
      const turn = ((quarter % 4) + 4) % 4
      return [[1, 0, 0] as const, [0, 1, 0] as const, [-1, 0, 0] as const, [0, -1, 0] as const][turn]!
    }
    const radians = (angle * Math.PI) / 180
    return [Math.cos(radians), Math.sin(radians), 0]
  }) as [Vector, Vector, Vector, Vector]

/** p(abcd) for real polarisations e1..e4 and dipoles a..d (not normalised: lengths are kept). */
export const isotropicFactor = (
  polarizations: readonly [Vector, Vector, Vector, Vector],
  dipoles: readonly [Vector, Vector, Vector, Vector],
): number => {
  const f = pairings(...polarizations)
  const g = pairings(...dipoles)
  const sum = g[0] + g[1] + g[2]
  // M = 5 I - (all ones).
  return (f[0] * (5 * g[0] - sum) + f[1] * (5 * g[1] - sum) + f[2] * (5 * g[2] - sum)) / 30
}
