/**
 * Spherical Bessel functions of complex argument, orders 0..count-1.
 *
 *   j_(n+1)(z) = (2n + 1)/z j_n(z) - j_(n-1)(z), the same for y and for h^(1) = j + i y
 *
 * j: power series where |z|^2 < 2 count + 12 (the terms never grow enough to lose more than three digits there), Miller's
 * downward recurrence up to |z| = count, upward beyond. y: upward, where it always grows.
 * Source: Abramowitz & Stegun (1964), 10.1.2, 10.1.3, 10.1.11, 10.1.19, 10.5. Proven by tests/engine/sphere.spec.ts.
 */
import Complex from 'complex.js'

const powerSeries = (z: Complex, order: number): Complex => {
  const square = z.mul(z).mul(-0.5)
  let leading = new Complex(1, 0)
  for (let k = 1; k <= order; k++) leading = leading.mul(z).div(2 * k + 1)
  let term = new Complex(1, 0)
  let sum = new Complex(1, 0)
  for (let k = 1; k < 200; k++) {
    term = term.mul(square).div(k * (2 * order + 2 * k + 1))
    sum = sum.add(term)
    if (term.abs() < 1e-17 * sum.abs()) break
  }
  return leading.mul(sum)
}

/** j_0(z)..j_(count-1)(z). */
export const complexSphericalJ = (z: Complex, count: number): Complex[] => {
  const size = z.abs()
  if (size * size < 2 * count + 12) return Array.from({ length: count }, (_, order) => powerSeries(z, order))
  const first = z.sin().div(z)
  const second = first.sub(z.cos()).div(z)
  if (size > count) {
    const out = [first, second]
    for (let n = 1; n + 1 < count; n++)
      out.push(
        out[n]!.mul(2 * n + 1)
          .div(z)
          .sub(out[n - 1]!),
      )
    return out.slice(0, count)
  }
  const start = count + 20 + Math.ceil(size)
  let above = new Complex(0, 0)
  let value = new Complex(1e-200, 0)
  const out: Complex[] = []
  for (let n = start; n > 0; n--) {
    const below = value
      .mul(2 * n + 1)
      .div(z)
      .sub(above)
    above = value
    value = below
    if (n - 1 < count) out[n - 1] = below
  }
  const factor = first.abs() > second.abs() ? first.div(out[0]!) : second.div(out[1]!)
  return out.map((entry) => entry.mul(factor))
}

/** y_0(z)..y_(count-1)(z). */
export const complexSphericalY = (z: Complex, count: number): Complex[] => {
  const first = z.cos().div(z).neg()
  const out = [first, first.sub(z.sin()).div(z)]
  for (let n = 1; n + 1 < count; n++)
    out.push(
      out[n]!.mul(2 * n + 1)
        .div(z)
        .sub(out[n - 1]!),
    )
  return out.slice(0, count)
}

/**
 * h^(1)_0(z)..h^(1)_(count-1)(z), outgoing for a time factor exp(-i w t). By its own recurrence: j + i y would cancel
 * where Im z > 0, and grows without harm where Im z < 0.
 */
export const complexSphericalH = (z: Complex, count: number): Complex[] => {
  const phase = z.mul(new Complex(0, 1)).exp()
  const first = phase.div(z).mul(new Complex(0, -1))
  const second = phase
    .neg()
    .div(z)
    .mul(new Complex(1, 0).add(new Complex(0, 1).div(z)))
  const out = [first, second]
  for (let n = 1; n + 1 < count; n++)
    out.push(
      out[n]!.mul(2 * n + 1)
        .div(z)
        .sub(out[n - 1]!),
    )
  return out.slice(0, count)
}
