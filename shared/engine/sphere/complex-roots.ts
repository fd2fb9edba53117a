/**
 * All zeros of a function in a rectangle of the complex plane, for functions that are analytic up to a positive factor.
 *
 * The winding number of f along the border counts the zeros inside (argument principle); rectangles are halved until
 * each holds one, which the secant method then polishes. Nothing inside can be missed, unlike with a set of starts.
 * Source: argument principle, as in Delves & Lyness, Math. Comput. 21, 543 (1967) (from memory).
 */
import Complex from 'complex.js'

export interface Rectangle {
  reMin: number
  reMax: number
  imMin: number
  imMax: number
}

type ComplexFunction = (z: Complex) => Complex

/** Change of arg f from a to b, halving the step until it turns by less than a quarter turn. */
const turn = (f: ComplexFunction, a: Complex, b: Complex, fa: Complex, fb: Complex, depth: number): number => {
  const change = fb.div(fa).arg()
  if (depth === 0 || (Math.abs(change) < 0.8 && depth < 22)) return change
  const middle = a.add(b).div(2)
  const fm = f(middle)
  return turn(f, a, middle, fa, fm, depth - 1) + turn(f, middle, b, fm, fb, depth - 1)
}

const windingNumber = (f: ComplexFunction, r: Rectangle): number => {
  const corners = [
    new Complex(r.reMin, r.imMin),
    new Complex(r.reMax, r.imMin),
    new Complex(r.reMax, r.imMax),
    new Complex(r.reMin, r.imMax),
  ]
  const pieces = 8
  let total = 0
  corners.forEach((from, index) => {
    const to = corners[(index + 1) % 4]!
    let a = from
    let fa = f(a)
    for (let piece = 1; piece <= pieces; piece++) {
      const b = from.add(to.sub(from).mul(piece / pieces))
      const fb = f(b)
      total += turn(f, a, b, fa, fb, 21)
      a = b
      fa = fb
    }
  })
  return Math.round(total / (2 * Math.PI))
}

const secant = (f: ComplexFunction, start: Complex, size: number): Complex => {
  let a = start
  let b = start.add(new Complex(size * 0.1, size * 0.05))
  let fa = f(a)
  let fb = f(b)
  for (let i = 0; i < 100; i++) {
    const slope = fb.sub(fa)
    if (slope.abs() === 0) break
    const step = fb.mul(b.sub(a)).div(slope)
    a = b
    fa = fb
    b = b.sub(step)
    fb = f(b)
    if (step.abs() < 1e-14 * b.abs() || fb.abs() === 0) break
  }
  return b
}

const contains = (r: Rectangle, z: Complex, slack: number): boolean =>
  z.re > r.reMin - slack && z.re < r.reMax + slack && z.im > r.imMin - slack && z.im < r.imMax + slack

/** Zeros inside `region`, ordered by real part. Throws when a zero lies on the border of every subdivision tried. */
export const findComplexRoots = (f: ComplexFunction, region: Rectangle): Complex[] => {
  const roots: Complex[] = []
  const queue: Rectangle[] = [region]
  for (let visits = 0; queue.length > 0; visits++) {
    if (visits > 5000) throw new Error('complex roots: expected isolated zeros; the subdivision did not separate them')
    const r = queue.pop()!
    const count = windingNumber(f, r)
    if (count <= 0) continue
    const width = r.reMax - r.reMin
    const height = r.imMax - r.imMin
    if (count === 1) {
      const root = secant(f, new Complex((r.reMin + r.reMax) / 2, (r.imMin + r.imMax) / 2), Math.min(width, height))
      if (contains(r, root, 1e-9)) {
        roots.push(root)
        continue
      }
    }
    // Cut off the middle, so that a zero on a line of symmetry is not hit by every cut.
    if (width > height) {
      const cut = r.reMin + 0.48 * width
      queue.push({ ...r, reMax: cut }, { ...r, reMin: cut })
    } else {
      const cut = r.imMin + 0.48 * height
      queue.push({ ...r, imMax: cut }, { ...r, imMin: cut })
    }
  }
  return roots.sort((x, y) => x.re - y.re)
}
