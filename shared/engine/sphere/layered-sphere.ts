/**
 * Secular determinant of a layered elastic sphere: core, optional shell, free surface or infinite matrix.
 *
 * Fields u = grad(phi) + curl curl (r psi) and curl (r chi). At radius r, with k = w/v_L, q = w/v_T, L = l(l+1), z the
 * radial function (j in the core, j and y in the shell, outgoing h^(1) in the matrix) and primes d/dr:
 *   longitudinal  u_r = z'     u_t = z/r        s_rr = -lambda k^2 z + 2 mu z''      s_rt = 2 mu (z'/r - z/r^2)
 *   transverse    u_r = L z/r  u_t = z/r + z'   s_rr = 2 mu L (z'/r - z/r^2)         s_rt = mu [(2L-2) z/r^2 - 2 z'/r - q^2 z]
 *   torsional     u = z        s = mu (z' - z/r)
 * Continuity of displacement and traction at each inner surface, no traction at a free one, give the rows.
 *
 * | symbol | variable | unit |
 * | w | omega, in units of v_T(core)/R_core | 1 |
 * | r | in units of R_core | 1 |
 * | mu, lambda | in units of mu(core) | 1 |
 *
 * Source: elasticity of the sphere after Lamb (1881); embedded form as in Dubrovskiy & Morochov, Sov. Phys. Solid State
 * (1981) (from memory). Proven by tests/engine/sphere.spec.ts against independent mpmath roots and published frequencies.
 */
import Complex from 'complex.js'
import { complexSphericalH, complexSphericalJ, complexSphericalY } from './complex-bessel'
import { lameOf, type LayeredSphere, type Medium, type SphereFamily } from './medium'

type Radial = (z: Complex, count: number) => Complex[]

interface Layer {
  lambda: number
  mu: number
  /** Velocities in units of the core's transverse one. */
  longitudinal: number
  transverse: number
  radials: Radial[]
}

interface Surface {
  radius: number
  inner: Layer
  /** Absent for a free surface. */
  outer?: Layer
}

const toLayer = (medium: Medium, core: Medium, radials: Radial[]): Layer => {
  const unit = lameOf(core).mu
  const { lambda, mu } = lameOf(medium)
  return {
    lambda: lambda / unit,
    mu: mu / unit,
    longitudinal: medium.longitudinalVelocityMPerS / core.transverseVelocityMPerS,
    transverse: medium.transverseVelocityMPerS / core.transverseVelocityMPerS,
    radials,
  }
}

const surfacesOf = (sphere: LayeredSphere): Surface[] => {
  const core = toLayer(sphere.core, sphere.core, [complexSphericalJ])
  const matrix = sphere.matrix && toLayer(sphere.matrix, sphere.core, [complexSphericalH])
  if (!sphere.shell) return [{ radius: 1, inner: core, outer: matrix }]
  const shell = toLayer(sphere.shell, sphere.core, [complexSphericalJ, complexSphericalY])
  return [
    { radius: 1, inner: core, outer: shell },
    { radius: 1 + sphere.shell.thicknessNm / sphere.radiusNm, inner: shell, outer: matrix },
  ]
}

/** z, z' and z'' (d/dr) of one radial function at wave number k. */
const radialAt = (radial: Radial, l: number, k: Complex, r: number) => {
  const values = radial(k.mul(r), l + 2)
  const z = values[l]!
  const slope = z.mul(l / r).sub(k.mul(values[l + 1]!))
  const curvature = k
    .mul(k)
    .neg()
    .add((l * (l + 1)) / (r * r))
    .mul(z)
    .sub(slope.mul(2 / r))
  return { z, slope, curvature }
}

/** Columns of one layer at a surface: displacement rows first, traction rows after. */
const columnsOf = (layer: Layer, family: SphereFamily, l: number, omega: Complex, r: number): Complex[][] => {
  const k = omega.div(layer.longitudinal)
  const q = omega.div(layer.transverse)
  const { lambda, mu } = layer
  const ell = l * (l + 1)
  return layer.radials.flatMap((radial) => {
    const transverse = radialAt(radial, l, q, r)
    if (family === 'torsional') {
      return [[transverse.z, transverse.slope.sub(transverse.z.div(r)).mul(mu)]]
    }
    const { z, slope, curvature } = radialAt(radial, l, k, r)
    const longitudinalStress = k
      .mul(k)
      .mul(z)
      .mul(-lambda)
      .add(curvature.mul(2 * mu))
    if (l === 0) return [[slope, longitudinalStress]]
    const t = transverse
    return [
      [
        z.mul(0).add(slope),
        z.div(r),
        longitudinalStress,
        slope
          .div(r)
          .sub(z.div(r * r))
          .mul(2 * mu),
      ],
      [
        t.z.mul(ell / r),
        t.z.div(r).add(t.slope),
        t.slope
          .div(r)
          .sub(t.z.div(r * r))
          .mul(2 * mu * ell),
        t.z
          .mul((2 * ell - 2) / (r * r))
          .sub(t.slope.mul(2 / r))
          .sub(q.mul(q).mul(t.z))
          .mul(mu),
      ],
    ]
  })
}

/** Determinant by elimination with partial pivoting, columns first scaled to unit size (a positive factor). */
const determinant = (matrix: Complex[][]): Complex => {
  const size = matrix.length
  for (let column = 0; column < size; column++) {
    const norm = Math.max(...matrix.map((row) => row[column]!.abs()))
    if (norm === 0) return new Complex(0, 0)
    for (const row of matrix) row[column] = row[column]!.div(norm)
  }
  let result = new Complex(1, 0)
  for (let step = 0; step < size; step++) {
    let pivot = step
    for (let row = step + 1; row < size; row++) {
      if (matrix[row]![step]!.abs() > matrix[pivot]![step]!.abs()) pivot = row
    }
    if (pivot !== step) {
      ;[matrix[pivot], matrix[step]] = [matrix[step]!, matrix[pivot]!]
      result = result.neg()
    }
    const head = matrix[step]![step]!
    if (head.abs() === 0) return new Complex(0, 0)
    result = result.mul(head)
    for (let row = step + 1; row < size; row++) {
      const factor = matrix[row]![step]!.div(head)
      for (let column = step; column < size; column++) {
        matrix[row]![column] = matrix[row]![column]!.sub(factor.mul(matrix[step]![column]!))
      }
    }
  }
  return result
}

/**
 * Secular function of a layered sphere, omega in units of v_T(core)/R_core; its zeros are the modes. The columns are
 * scaled by positive numbers, which moves neither a zero nor the argument, so both sign changes along the real axis and
 * winding numbers around a region count zeros.
 */
export const secularDeterminant = (
  sphere: LayeredSphere,
  family: SphereFamily,
  l: number,
): ((omega: Complex) => Complex) => {
  const surfaces = surfacesOf(sphere)
  const perLayer = family === 'torsional' || l === 0 ? 1 : 2
  const layers = [
    ...new Set(surfaces.flatMap((surface) => (surface.outer ? [surface.inner, surface.outer] : [surface.inner]))),
  ]
  const offsets = new Map<Layer, number>()
  let unknowns = 0
  for (const layer of layers) {
    offsets.set(layer, unknowns)
    unknowns += perLayer * layer.radials.length
  }
  return (omega) => {
    const rows: Complex[][] = []
    for (const { radius, inner, outer } of surfaces) {
      const sides = [{ layer: inner, sign: 1 }, ...(outer ? [{ layer: outer, sign: -1 }] : [])]
      // A free surface has no condition on the displacement.
      const firstRow = outer ? 0 : perLayer
      for (let row = firstRow; row < 2 * perLayer; row++) {
        const line = Array.from({ length: unknowns }, () => new Complex(0, 0))
        for (const { layer, sign } of sides) {
          columnsOf(layer, family, l, omega, radius).forEach((column, index) => {
            line[offsets.get(layer)! + index] = column[row]!.mul(sign)
          })
        }
        rows.push(line)
      }
    }
    return determinant(rows)
  }
}
