/**
 * Third-order response of several bright states that share one bath.
 *
 * Each term is  p(abcd) x phase and decay x bath factor  (all signs +), e_k = (E_k - E_frame)/hbar:
 *   R  GSB            e^{(i e_k - gam_k0) t1} e^{-t2/T1k} e^{(-i e_l - gam_l0) t3}                       dipoles k k l l
 *   R  SE population  e^{(i e_k - gam_k0) t1} e^{-t2/T1k} e^{(-i e_k - gam_k0) t3}                       k k k k
 *   R  SE coherence   e^{(i e_k - gam_k0) t1} e^{(-i(e_l - e_k) - gam_kl) t2} e^{(-i e_l - gam_l0) t3}   k l k l
 *   NR GSB            e^{(-i e_k - gam_k0) t1} e^{-t2/T1k} e^{(-i e_l - gam_l0) t3}                      k k l l
 *   NR SE population  e^{(-i e_k - gam_k0)(t1 + t3)} e^{-t2/T1k}                                         k k k k
 *   NR SE coherence   e^{(-i e_k - gam_k0)(t1 + t3)} e^{(-i(e_k - e_l) - gam_kl) t2}                     k l l k
 * Bath, amplitudes k and l, g = g0 of amplitude 1, s = t1 + t2 + t3:
 *   R  SE   -k^2 g*(t1+t2) - l^2 g(t2+t3) + kl [-g*(t1) + g(t2) - g*(t3) + g*(s)]
 *   R  GSB  -k^2 g*(t1) - l^2 g(t3) + kl [g*(t2) - g*(t1+t2) - g*(t2+t3) + g*(s)]
 *   NR SE   -l^2 g*(t2) - k^2 g(s) + kl [-g(t1) - g*(t3) + g(t1+t2) + g*(t2+t3)]
 *   NR GSB  -k^2 g(t1) - l^2 g(t3) + kl [-g(t2) + g(t1+t2) + g(t2+t3) - g(s)]
 *
 * Source: Mukamel, Principles of Nonlinear Optical Spectroscopy (1995), ch. 8; Abramavicius et al., Chem. Rev. 109, 2350
 * (2009). Proven by tests/engine/fine-structure.spec.ts: Liouvillian propagation without a bath, sum over vibronic states
 * with one, and the one-state limit.
 */
import { HBAR_MEV_PS } from '../constants'
import { coherenceRates, type FineStructure } from './model'
import type { Vector } from './orientation'

/** Orientational factor of dipoles a, b, c, d in the order pulse 1, 2, 3, detection. */
export type Weight = (a: Vector, b: Vector, c: Vector, d: Vector) => number

/** Complex value of g0 at one time, as [re, im]. */
export type Broadening = (timePs: number) => readonly [number, number]

export type PathwayKind =
  | 'rephasingBleach'
  | 'rephasingPopulation'
  | 'rephasingCoherence'
  | 'nonRephasingBleach'
  | 'nonRephasingPopulation'
  | 'nonRephasingCoherence'

export interface PathwayTerm {
  kind: PathwayKind
  /** Indices of the states: k first excited, l second. */
  k: number
  l: number
  weight: number
}

/** Every term with a non-zero orientational factor. */
export const pathwayTerms = (system: FineStructure, weight: Weight): PathwayTerm[] => {
  const terms: PathwayTerm[] = []
  const add = (kind: PathwayKind, k: number, l: number, factor: number) => {
    if (factor !== 0) terms.push({ kind, k, l, weight: factor })
  }
  system.states.forEach(({ dipole: dk }, k) =>
    system.states.forEach(({ dipole: dl }, l) => {
      const bleach = weight(dk, dk, dl, dl)
      add('rephasingBleach', k, l, bleach)
      add('nonRephasingBleach', k, l, bleach)
      if (k === l) {
        const population = weight(dk, dk, dk, dk)
        add('rephasingPopulation', k, k, population)
        add('nonRephasingPopulation', k, k, population)
      } else {
        add('rephasingCoherence', k, l, weight(dk, dl, dk, dl))
        add('nonRephasingCoherence', k, l, weight(dk, dl, dl, dk))
      }
    }),
  )
  return terms
}

const isRephasing = (kind: PathwayKind): boolean => kind.startsWith('rephasing')
const isBleach = (kind: PathwayKind): boolean => kind.endsWith('Bleach')

/** Exponent of the bath factor of one term at (t1, t2, t3), as [re, im]. */
export const bathExponent = (
  kind: PathwayKind,
  k: number,
  l: number,
  g: Broadening,
  t1: number,
  t2: number,
  t3: number,
): [number, number] => {
  const at1 = g(t1)
  const at2 = g(t2)
  const at3 = g(t3)
  const at12 = g(t1 + t2)
  const at23 = g(t2 + t3)
  const atAll = g(t1 + t2 + t3)
  const kl = k * l
  let re = 0
  let im = 0
  // sign +1 adds g, sign -1 adds its conjugate.
  const add = (factor: number, value: readonly [number, number], sign: 1 | -1) => {
    re += factor * value[0]
    im += factor * sign * value[1]
  }
  if (isRephasing(kind) && isBleach(kind)) {
    add(-k * k, at1, -1)
    add(-l * l, at3, 1)
    add(kl, at2, -1)
    add(-kl, at12, -1)
    add(-kl, at23, -1)
    add(kl, atAll, -1)
  } else if (isRephasing(kind)) {
    add(-k * k, at12, -1)
    add(-l * l, at23, 1)
    add(-kl, at1, -1)
    add(kl, at2, 1)
    add(-kl, at3, -1)
    add(kl, atAll, -1)
  } else if (isBleach(kind)) {
    add(-k * k, at1, 1)
    add(-l * l, at3, 1)
    add(-kl, at2, 1)
    add(kl, at12, 1)
    add(kl, at23, 1)
    add(-kl, atAll, 1)
  } else {
    add(-l * l, at2, -1)
    add(-k * k, atAll, 1)
    add(-kl, at1, 1)
    add(-kl, at3, -1)
    add(kl, at12, 1)
    add(kl, at23, -1)
  }
  return [re, im]
}

export interface FineStructureResponse {
  /** [re, im] */
  rephasing: [number, number]
  nonRephasing: [number, number]
}

/**
 * Rephasing and non-rephasing response at any (t1, t2, t3) >= 0, in ps, in the frame rotating at `frameEnergyMeV`, without
 * the ensemble. Allocates nothing per term but its exponent; call it once and use the returned function.
 */
export const fineStructureResponse = (
  system: FineStructure,
  weight: Weight,
  broadening: Broadening,
  frameEnergyMeV: number,
): ((t1: number, t2: number, t3: number) => FineStructureResponse) => {
  const rates = coherenceRates(system)
  const terms = pathwayTerms(system, weight)
  const count = system.states.length
  const e = system.states.map((state) => (state.energyMeV - frameEnergyMeV) / HBAR_MEV_PS)
  const kappa = system.states.map((state) => state.amplitude)
  return (t1, t2, t3) => {
    const out: FineStructureResponse = { rephasing: [0, 0], nonRephasing: [0, 0] }
    for (const { kind, k, l, weight: factor } of terms) {
      const rephasing = isRephasing(kind)
      // The state whose coherence is seen during t3.
      const last = isBleach(kind) || rephasing ? l : k
      const coherence = !isBleach(kind) && k !== l
      const [bathRe, bathIm] = bathExponent(kind, kappa[k]!, kappa[l]!, broadening, t1, t2, t3)
      const rate2 = coherence ? rates.betweenStates[k * count + l]! : rates.decay[k]!
      const phase2 = coherence ? (rephasing ? -(e[l]! - e[k]!) : -(e[k]! - e[l]!)) : 0
      const re = bathRe - rates.optical[k]! * t1 - rate2 * t2 - rates.optical[last]! * t3
      const im = bathIm + (rephasing ? 1 : -1) * e[k]! * t1 + phase2 * t2 - e[last]! * t3
      const size = factor * Math.exp(re)
      const sum = rephasing ? out.rephasing : out.nonRephasing
      sum[0] += size * Math.cos(im)
      sum[1] += size * Math.sin(im)
    }
    return out
  }
}
