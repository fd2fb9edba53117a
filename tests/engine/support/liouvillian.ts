import { exponential, zeros, type Matrix } from './complex-matrix'

interface System {
  /** rad/ps of each bright state above the frame. */
  frequencies: number[]
  dipoles: number[]
  /** 1/ps, to the ground state. */
  decay: number[]
  /** Amplitudes f_k of one common fluctuation F = sum f_k |k><k|, 1/sqrt(ps). */
  fluctuation: number[]
}

/**
 * Phase-matched third-order signals Tr{ mu- G(t3) [mu+, G(t2) [mu+-, G(t1) [mu-+, rho0]]] } of a ground state and bright
 * states, with the full Lindblad generator as a matrix over |i><j|. The rephasing signal takes mu- first.
 */
export const propagateLiouvillian = (system: System, [t1, t2, t3]: [number, number, number]) => {
  const levels = system.frequencies.length + 1
  const size = levels * levels
  const at = (i: number, j: number) => i * levels + j
  const energy = [0, ...system.frequencies]
  const f = [0, ...system.fluctuation]
  const generator = zeros(size)
  for (let i = 0; i < levels; i++) {
    for (let j = 0; j < levels; j++) {
      const row = at(i, j)
      generator.im[row * size + row]! -= energy[i]! - energy[j]!
      generator.re[row * size + row]! -= (f[i]! - f[j]!) ** 2 / 2
      for (let k = 1; k < levels; k++) {
        const rate = system.decay[k - 1]!
        // D[|0><k|]: feeds the ground state, takes from everything that touches k.
        if (i === k) generator.re[row * size + row]! -= rate / 2
        if (j === k) generator.re[row * size + row]! -= rate / 2
      }
    }
  }
  for (let k = 1; k < levels; k++) generator.re[at(0, 0) * size + at(k, k)]! += system.decay[k - 1]!

  type Density = { re: Float64Array; im: Float64Array }
  const apply = (matrix: Matrix, rho: Density): Density => {
    const out = { re: new Float64Array(size), im: new Float64Array(size) }
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) {
        const [re, im] = [matrix.re[i * size + j]!, matrix.im[i * size + j]!]
        out.re[i]! += re * rho.re[j]! - im * rho.im[j]!
        out.im[i]! += re * rho.im[j]! + im * rho.re[j]!
      }
    }
    return out
  }
  /** [mu, rho] with mu+ = sum mu_k |k><0| or mu- = its adjoint; both real. */
  const commutator = (raising: boolean, rho: Density): Density => {
    const mu = (i: number, j: number) => {
      if (raising && j === 0 && i > 0) return system.dipoles[i - 1]!
      if (!raising && i === 0 && j > 0) return system.dipoles[j - 1]!
      return 0
    }
    const out = { re: new Float64Array(size), im: new Float64Array(size) }
    for (let i = 0; i < levels; i++) {
      for (let j = 0; j < levels; j++) {
        for (let k = 0; k < levels; k++) {
          for (const part of ['re', 'im'] as const) {
            out[part][at(i, j)]! += mu(i, k) * rho[part][at(k, j)]! - rho[part][at(i, k)]! * mu(k, j)
          }
        }
      }
    }
    return out
  }
  const detect = (rho: Density): [number, number] => {
    let re = 0
    let im = 0
    for (let k = 1; k < levels; k++) {
      re += system.dipoles[k - 1]! * rho.re[at(k, 0)]!
      im += system.dipoles[k - 1]! * rho.im[at(k, 0)]!
    }
    return [re, im]
  }
  const propagators = [t1, t2, t3].map((t) => exponential(generator, t)) as [Matrix, Matrix, Matrix]
  const signal = (firstRaises: boolean): [number, number] => {
    let rho: Density = { re: new Float64Array(size), im: new Float64Array(size) }
    rho.re[at(0, 0)] = 1
    rho = apply(propagators[0], commutator(firstRaises, rho))
    rho = apply(propagators[1], commutator(!firstRaises, rho))
    rho = apply(propagators[2], commutator(true, rho))
    return detect(rho)
  }
  return { rephasing: signal(false), nonRephasing: signal(true) }
}
