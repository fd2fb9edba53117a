/**
 * Several bright states above one ground state (V-type system): energies, dipoles, lifetimes and coherence rates.
 *
 *   gam_k0 = 1/(2 T1k) + g_k0,   gam_kl = (1/T1k + 1/T1l)/2 + g_kl     (total rates; g = pure dephasing)
 *
 * A set of pure-dephasing rates belongs to a physical process only when the matrix g_k0 + g_l0 - g_kl (diagonal 2 g_k0) is
 * positive semidefinite; otherwise populations would turn negative, so it is refused.
 *
 * | symbol | variable | unit |
 * | E_k | energyMeV | meV |
 * | kappa_k | amplitude: displacement of the bath relative to a state of amplitude 1 | 1 |
 * | T1k | lifetimePs, Infinity for none | ps |
 * | 2 hbar g_k0, 2 hbar g_kl | coherenceDephasingMeV[k][k], [k][l]: full widths from pure dephasing | meV |
 *
 * Source: Breuer & Petruccione, The Theory of Open Quantum Systems (2002), ch. 3 (complete positivity), from memory.
 */
import { HBAR_MEV_PS } from '../constants'
import type { Vector } from './orientation'

export const MAX_BRIGHT_STATES = 8

export interface BrightState {
  label: string
  energyMeV: number
  dipole: Vector
  amplitude: number
  lifetimePs: number
}

export interface FineStructure {
  states: readonly BrightState[]
  coherenceDephasingMeV: readonly (readonly number[])[]
}

export interface CoherenceRates {
  /** 1/ps, coherence of state k with the ground state. */
  optical: Float64Array
  /** 1/ps, coherence between states k and l; the diagonal holds 1/T1k. Row by row. */
  betweenStates: Float64Array
  /** 1/ps. */
  decay: Float64Array
}

/** Smallest pivot of the symmetric matrix, by LDL^T; negative when it is not positive semidefinite. */
const smallestPivot = (matrix: number[][]): number => {
  const m = matrix.map((row) => [...row])
  const scale = Math.max(1e-300, ...m.map((row, k) => Math.abs(row[k]!)))
  let smallest = Infinity
  for (let step = 0; step < m.length; step++) {
    // The largest pivot first: a zero one can only be last, and then its rest must be zero too.
    let best = step
    for (let k = step + 1; k < m.length; k++) if (m[k]![k]! > m[best]![best]!) best = k
    ;[m[step], m[best]] = [m[best]!, m[step]!]
    for (const row of m) [row[step], row[best]] = [row[best]!, row[step]!]
    const pivot = m[step]![step]!
    if (pivot <= 1e-12 * scale) {
      const rest = m.slice(step).flatMap((row) => row.slice(step))
      const worst = Math.max(...rest.map(Math.abs))
      return worst <= 1e-10 * scale ? Math.min(smallest, 0) : -worst
    }
    smallest = Math.min(smallest, pivot)
    for (let k = step + 1; k < m.length; k++) {
      const factor = m[k]![step]! / pivot
      for (let l = step; l < m.length; l++) m[k]![l]! -= factor * m[step]![l]!
    }
  }
  return smallest
}

/** Total rates of every coherence. Throws RangeError naming the field when the system is not physical. */
export const coherenceRates = (system: FineStructure): CoherenceRates => {
  const { states, coherenceDephasingMeV: widths } = system
  const count = states.length
  if (count < 1 || count > MAX_BRIGHT_STATES) {
    throw new RangeError(`brightStates: expected 1 to ${MAX_BRIGHT_STATES} states; found ${count}`)
  }
  const shape = widths.map((row) => row.length)
  if (widths.length !== count || shape.some((length) => length !== count)) {
    throw new RangeError(
      `coherenceDephasingMeV: expected a ${count} x ${count} matrix; found rows of ${shape.join(', ')}`,
    )
  }
  widths.forEach((row, k) =>
    row.forEach((width, l) => {
      if (!(Number.isFinite(width) && width >= 0)) {
        throw new RangeError(`coherenceDephasingMeV[${k}][${l}]: expected a width of 0 meV or more; found ${width}`)
      }
      if (width !== widths[l]![k]) {
        throw new RangeError(
          `coherenceDephasingMeV[${k}][${l}]: expected the same value as [${l}][${k}] = ${widths[l]![k]}; found ${width}`,
        )
      }
    }),
  )
  const pure = widths.map((row) => row.map((width) => width / (2 * HBAR_MEV_PS)))
  const gram = pure.map((row, k) => row.map((rate, l) => pure[k]![k]! + pure[l]![l]! - (k === l ? 0 : rate)))
  if (smallestPivot(gram) < 0) {
    throw new RangeError(
      'coherenceDephasingMeV: expected dephasing between states that a physical process can have (the matrix G_k0 + G_l0 - G_kl positive semidefinite); lower the widths between states or raise the optical ones',
    )
  }
  const decay = Float64Array.from(states, (state, k) => {
    if (!(state.lifetimePs > 0)) {
      throw new RangeError(`brightStates[${k}].lifetimePs: expected a time above 0 ps; found ${state.lifetimePs}`)
    }
    return 1 / state.lifetimePs
  })
  return {
    decay,
    optical: Float64Array.from(states, (_, k) => decay[k]! / 2 + pure[k]![k]!),
    betweenStates: Float64Array.from({ length: count * count }, (_, index) => {
      const k = Math.floor(index / count)
      const l = index % count
      return k === l ? decay[k]! : (decay[k]! + decay[l]!) / 2 + pure[k]![l]!
    }),
  }
}
