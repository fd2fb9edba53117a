/** Small complex matrices for slow, plain checks: row by row, re and im apart. */
export interface Matrix {
  size: number
  re: Float64Array
  im: Float64Array
}

export const zeros = (size: number): Matrix => ({
  size,
  re: new Float64Array(size * size),
  im: new Float64Array(size * size),
})

export const identity = (size: number): Matrix => {
  const out = zeros(size)
  for (let k = 0; k < size; k++) out.re[k * size + k] = 1
  return out
}

export const multiply = (a: Matrix, b: Matrix): Matrix => {
  const { size } = a
  const out = zeros(size)
  for (let i = 0; i < size; i++) {
    for (let k = 0; k < size; k++) {
      const [re, im] = [a.re[i * size + k]!, a.im[i * size + k]!]
      if (re === 0 && im === 0) continue
      for (let j = 0; j < size; j++) {
        const at = k * size + j
        out.re[i * size + j]! += re * b.re[at]! - im * b.im[at]!
        out.im[i * size + j]! += re * b.im[at]! + im * b.re[at]!
      }
    }
  }
  return out
}

export const combine = (a: Matrix, factor: number, b: Matrix): Matrix => ({
  size: a.size,
  re: a.re.map((value, index) => value + factor * b.re[index]!),
  im: a.im.map((value, index) => value + factor * b.im[index]!),
})

export const adjoint = (a: Matrix): Matrix => {
  const out = zeros(a.size)
  for (let i = 0; i < a.size; i++) {
    for (let j = 0; j < a.size; j++) {
      out.re[j * a.size + i] = a.re[i * a.size + j]!
      out.im[j * a.size + i] = -a.im[i * a.size + j]!
    }
  }
  return out
}

export const trace = (a: Matrix): [number, number] => {
  let re = 0
  let im = 0
  for (let k = 0; k < a.size; k++) {
    re += a.re[k * a.size + k]!
    im += a.im[k * a.size + k]!
  }
  return [re, im]
}

/** exp(factor a) by scaling, a Taylor series and squaring. */
export const exponential = (a: Matrix, factor: number): Matrix => {
  const norm = Math.max(...a.re.map((value, index) => Math.hypot(value, a.im[index]!))) * Math.abs(factor) * a.size
  const halvings = Math.max(0, Math.ceil(Math.log2(Math.max(norm, 1e-300))) + 2)
  const scale = factor / 2 ** halvings
  let term = identity(a.size)
  let sum = identity(a.size)
  for (let k = 1; k < 24; k++) {
    term = multiply(term, a)
    term = combine(zeros(a.size), scale / k, term)
    sum = combine(sum, 1, term)
  }
  for (let k = 0; k < halvings; k++) sum = multiply(sum, sum)
  return sum
}
