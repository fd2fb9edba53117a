import { adjoint, exponential, multiply, trace, zeros, type Matrix } from './complex-matrix'

interface System {
  frequencies: number[]
  dipoles: number[]
  /** Displacement of the mode in each state, in units where the Huang-Rhys factor is its square. */
  displacements: number[]
  omega: number
  /** exp(-hbar omega / k_B T). */
  boltzmann: number
}

/** Enough that neither the thermal tail at 40 K (0.61^64) nor the displaced states reach the edge of the basis. */
const LEVELS = 64

/** exp(-i H_k t) in the number basis of the ground state: D^+ exp(-i (e + n omega) t) D. */
const propagator = (displacement: Matrix, frequency: number, omega: number, t: number): Matrix => {
  const diagonal = zeros(LEVELS)
  for (let n = 0; n < LEVELS; n++) {
    const phase = -(frequency + n * omega) * t
    diagonal.re[n * LEVELS + n] = Math.cos(phase)
    diagonal.im[n * LEVELS + n] = Math.sin(phase)
  }
  return multiply(adjoint(displacement), multiply(diagonal, displacement))
}

/** D = exp(d (b^+ - b)) in a number basis large enough for the levels used. */
const displacementMatrix = (d: number): Matrix => {
  const generator = zeros(LEVELS)
  for (let n = 0; n + 1 < LEVELS; n++) {
    generator.re[(n + 1) * LEVELS + n] = Math.sqrt(n + 1)
    generator.re[n * LEVELS + n + 1] = -Math.sqrt(n + 1)
  }
  return exponential(generator, d)
}

/** Rephasing and non-rephasing response by propagating the thermal vibrational state along every pathway. */
export const sumOverVibronicStates = (system: System, [t1, t2, t3]: [number, number, number]) => {
  const { frequencies, dipoles, omega, boltzmann } = system
  const none = displacementMatrix(0)
  const displaced = system.displacements.map(displacementMatrix)
  const ground = (t: number) => propagator(none, 0, omega, t)
  const excited = (k: number, t: number) => propagator(displaced[k]!, frequencies[k]!, omega, t)
  const thermal = zeros(LEVELS)
  for (let n = 0; n < LEVELS; n++) thermal.re[n * LEVELS + n] = (1 - boltzmann) * boltzmann ** n
  const evolve = (ket: Matrix, rho: Matrix, bra: Matrix) => multiply(ket, multiply(rho, adjoint(bra)))
  const rephasing: [number, number] = [0, 0]
  const nonRephasing: [number, number] = [0, 0]
  const add = (sum: [number, number], weight: number, rho: Matrix) => {
    const [re, im] = trace(rho)
    sum[0] += weight * re
    sum[1] += weight * im
  }
  frequencies.forEach((_, k) =>
    frequencies.forEach((__, l) => {
      const weight = dipoles[k]! ** 2 * dipoles[l]! ** 2
      const bra = evolve(ground(t1), thermal, excited(k, t1))
      const ket = evolve(excited(k, t1), thermal, ground(t1))
      add(rephasing, weight, evolve(excited(l, t3), evolve(ground(t2), bra, ground(t2)), ground(t3)))
      add(rephasing, weight, evolve(excited(l, t3), evolve(excited(l, t2), bra, excited(k, t2)), ground(t3)))
      add(nonRephasing, weight, evolve(excited(l, t3), evolve(ground(t2), ket, ground(t2)), ground(t3)))
      add(nonRephasing, weight, evolve(excited(k, t3), evolve(excited(k, t2), ket, excited(l, t2)), ground(t3)))
    }),
  )
  return { rephasing, nonRephasing }
}
