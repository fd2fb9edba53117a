/**
 * The first `count` roots of a smooth real function above `from`, in order. Derived here from bisection and the golden
 * section; no formula of its own.
 *
 * Scanned in steps; a step whose ends have equal sign is looked at again where |f| has a minimum inside, so that a close
 * pair of roots is not passed over. Each root is bisected to the last bit. Stops with an error after 20 000 steps: a
 * secular equation of a sphere has infinitely many roots, so that means a fault of the caller.
 */
export const findRoots = (
  f: (x: number) => number,
  options: { from: number; step: number; count: number },
): number[] => {
  const roots: number[] = []
  let x = options.from
  let value = f(x)
  let before = value
  for (let steps = 0; roots.length < options.count; steps++) {
    if (steps > 20_000)
      throw new Error(`roots: expected ${options.count} roots above ${options.from}; found ${roots.length}`)
    const next = x + options.step
    const after = f(next)
    if (value === 0) roots.push(x)
    else if (Math.sign(value) !== Math.sign(after) && after !== 0) roots.push(bisect(f, x, next, value))
    else if (
      Math.sign(before) === Math.sign(value) &&
      Math.abs(value) < Math.abs(before) &&
      Math.abs(value) <= Math.abs(after)
    ) {
      // |f| dips around x without a change of sign: look for a pair of roots between the neighbours.
      roots.push(...findPair(f, x - options.step, next, Math.sign(value)))
    }
    before = value
    x = next
    value = after
  }
  return roots.sort((a, b) => a - b).slice(0, options.count)
}

/** Root between a and b, f(a) and f(b) of opposite sign. */
const bisect = (f: (x: number) => number, a: number, b: number, fa: number): number => {
  let low = a
  let high = b
  for (let i = 0; i < 200; i++) {
    const middle = (low + high) / 2
    if (middle === low || middle === high) break
    const value = f(middle)
    if (value === 0) return middle
    if (Math.sign(value) === Math.sign(fa)) low = middle
    else high = middle
  }
  return (low + high) / 2
}

const golden = (Math.sqrt(5) - 1) / 2

const findPair = (f: (x: number) => number, a: number, b: number, sign: number): number[] => {
  let low = a
  let high = b
  for (let i = 0; i < 80 && high - low > 1e-13 * high; i++) {
    const left = high - golden * (high - low)
    const right = low + golden * (high - low)
    const fLeft = f(left) * sign
    const fRight = f(right) * sign
    if (fLeft < 0) return [bisect(f, a, left, f(a)), bisect(f, left, b, f(left))]
    if (fRight < 0) return [bisect(f, a, right, f(a)), bisect(f, right, b, f(right))]
    if (fLeft < fRight) high = right
    else low = left
  }
  return []
}
