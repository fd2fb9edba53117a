/**
 * Nodes and weights of the n-point Gauss-Legendre rule on [-1, 1], ascending, exact for polynomials of degree 2n - 1.
 *
 * The roots of P_n by Newton's method from the Chebyshev-like estimate cos(pi (i + 3/4) / (n + 1/2)); weights
 * 2 / ((1 - x^2) P_n'(x)^2). Source: Abramowitz & Stegun (1964), 25.4.29. Accuracy: 4e-16 (tests/engine/quadrature.spec.ts).
 */

export interface QuadratureRule {
  nodes: Float64Array
  weights: Float64Array
}

const cache = new Map<number, QuadratureRule>()

const legendreWithDerivative = (n: number, x: number): [value: number, derivative: number] => {
  let previous = 1
  let value = x
  for (let k = 2; k <= n; k++) {
    const next = ((2 * k - 1) * x * value - (k - 1) * previous) / k
    previous = value
    value = next
  }
  return [value, (n * (x * value - previous)) / (x * x - 1)]
}

export const gaussLegendre = (n: number): QuadratureRule => {
  const known = cache.get(n)
  if (known) return known
  const nodes = new Float64Array(n)
  const weights = new Float64Array(n)
  for (let i = 0; i < Math.ceil(n / 2); i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5))
    let derivative = 1
    // Newton converges quadratically from this start: five steps reach the last digit for every n below 1000.
    for (let step = 0; step < 6; step++) {
      const [value, slope] = legendreWithDerivative(n, x)
      derivative = slope
      x -= value / slope
    }
    if (n % 2 === 1 && i === (n - 1) / 2) x = 0
    derivative = legendreWithDerivative(n, x)[1]
    const weight = 2 / ((1 - x * x) * derivative * derivative)
    nodes[i] = -x
    nodes[n - 1 - i] = x
    weights[n - 1 - i] = weight
    weights[i] = weight
  }
  const rule = { nodes, weights }
  cache.set(n, rule)
  return rule
}

const analyses = new Map<number, Float64Array>()

/**
 * Matrix that turns values at the n Gauss nodes into Legendre coefficients: a_m = (2m + 1)/2 sum_i weight_i P_m(x_i) f_i,
 * row-major [m][i]. The expansion sum a_m P_m(x) interpolates f at the nodes.
 */
export const legendreAnalysis = (n: number): Float64Array => {
  const known = analyses.get(n)
  if (known) return known
  const { nodes, weights } = gaussLegendre(n)
  const matrix = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    const x = nodes[i]!
    let previous = 0
    let value = 1
    for (let m = 0; m < n; m++) {
      matrix[m * n + i] = (m + 0.5) * weights[i]! * value
      const next = ((2 * m + 1) * x * value - m * previous) / (m + 1)
      previous = value
      value = next
    }
  }
  analyses.set(n, matrix)
  return matrix
}
