/**
 * Exciton confined in a sphere-like dot, coupled to bulk acoustic phonons: deformation potential and piezoelectric field.
 *
 *   J(w) = w^3/(4 pi rho hbar v_L^5) [D_e e^{-w^2 a_e^2/4 v_L^2} - D_h e^{-w^2 a_h^2/4 v_L^2}]^2
 *        + sum_(j = L,T) A_j w/(4 pi rho hbar v_j^3) (e e_14/(eps_0 eps_r))^2 [e^{-w^2 a_e^2/4 v_j^2} - e^{-w^2 a_h^2/4 v_j^2}]^2
 *   A_L = 12/35, A_T = 16/35
 *
 * | symbol | variable | unit |
 * | rho | densityKgPerM3 | kg/m^3 |
 * | v_L, v_T | longitudinalVelocityMPerS, transverseVelocityMPerS | m/s |
 * | D_e, D_h | electronShiftEV, holeShiftEV: signed shifts of the two band edges per unit dilation | eV |
 * | a_e, a_h | electronLengthNm, holeLengthNm of psi ~ exp(-r^2/2a^2) | nm |
 * | e_14 | piezoCoefficientCPerM2 | C/m^2 |
 * | eps_r | relativePermittivity | 1 |
 *
 * Source: Krummheuer, Axt & Kuhn, Phys. Rev. B 65, 195313 (2002); Takagahara, Phys. Rev. Lett. 71, 3577 (1993) for the
 * averages over directions. Accuracy: 1e-12 relative to max(1, |g0|) (tests/engine/compact-bath.spec.ts).
 */
import type { ConfinedExcitonTerm } from '../../schemas/parameter-set'
import { SI } from '../constants'
import type { Continuum } from './continuum'

const HBAR_SI = SI.planckJS / (2 * Math.PI)
const PS = 1e-12
const NM = 1e-9
const PIEZO_AVERAGES = { longitudinal: 12 / 35, transverse: 16 / 35 } as const

/** One branch: J = prefactor w^power [electron e^{-(w/cut_e)^2} - hole e^{-(w/cut_h)^2}]^2, w in rad/ps. */
interface Branch {
  prefactor: number
  power: number
  electron: number
  hole: number
  electronCut: number
  holeCut: number
}

const branchesOf = (term: ConfinedExcitonTerm): Branch[] => {
  const cuts = (velocity: number) => ({
    electronCut: ((2 * velocity) / (term.electronLengthNm * NM)) * PS,
    holeCut: ((2 * velocity) / (term.holeLengthNm * NM)) * PS,
  })
  const stiffness = 4 * Math.PI * term.densityKgPerM3 * HBAR_SI
  const { longitudinalVelocityMPerS: vL, transverseVelocityMPerS: vT } = term
  const field =
    (SI.elementaryChargeC * term.piezoCoefficientCPerM2) / (SI.vacuumPermittivityFPerM * term.relativePermittivity)
  const joule = SI.elementaryChargeC
  // Prefactors from SI (w in rad/s, J in rad/s) to rad/ps: J_ps = PS J, w = w_ps / PS.
  const piezo = (average: number, velocity: number): Branch => ({
    prefactor: (average * field * field) / (stiffness * velocity ** 3),
    power: 1,
    electron: 1,
    hole: 1,
    ...cuts(velocity),
  })
  return [
    {
      prefactor: ((joule * joule) / (stiffness * vL ** 5)) * PS ** -2,
      power: 3,
      electron: term.electronShiftEV,
      hole: term.holeShiftEV,
      ...cuts(vL),
    },
    piezo(PIEZO_AVERAGES.longitudinal, vL),
    piezo(PIEZO_AVERAGES.transverse, vT),
  ].filter(({ prefactor, electron, hole, electronCut, holeCut }) => {
    const flat = electron === hole && electronCut === holeCut
    return prefactor > 0 && (electron !== 0 || hole !== 0) && !flat
  })
}

/** electron e^{-x} - hole e^{-y} with the cancellation of equal amplitudes left to expm1. */
const formFactor = (branch: Branch, w: number): number => {
  const x = (w / branch.electronCut) ** 2
  const y = (w / branch.holeCut) ** 2
  const contrast = branch.electron - branch.hole
  return x <= y
    ? Math.exp(-x) * (contrast - branch.hole * Math.expm1(x - y))
    : Math.exp(-y) * (contrast + branch.electron * Math.expm1(y - x))
}

export const confinedExcitonContinuum = (term: ConfinedExcitonTerm): Continuum => {
  const branches = branchesOf(term)
  const cuts = branches.flatMap(({ electronCut, holeCut }) => [electronCut, holeCut])
  const sharpest = cuts.reduce((least, cut) => Math.min(least, cut), Infinity)
  const widest = cuts.reduce((most, cut) => Math.max(most, cut), 0)
  const deformation = branches.find(({ power }) => power === 3)
  const contrast = deformation ? (deformation.electron - deformation.hole) ** 2 : 0
  const silent = branches.length === 0
  return {
    silent,
    density: (w) =>
      branches.reduce((sum, branch) => sum + branch.prefactor * w ** branch.power * formFactor(branch, w) ** 2, 0),
    // The piezoelectric parts start with w^5; below 1e-7 of the cutoff only w^3 is left to count.
    low:
      deformation && contrast > 0
        ? { exponent: 3, coefficient: deformation.prefactor * contrast }
        : { exponent: 5, coefficient: 0 },
    lowScale: silent ? 1 : sharpest,
    // The squared form factor falls as exp(-2 (w/cut)^2).
    upper: silent ? 1 : 4.7 * widest,
    reach: silent ? 1 : 4.7 * widest,
    panelWidth: (start) =>
      cuts.reduce((least, cut) => (start < 4.7 * cut ? Math.min(least, 1.2 * cut) : least), Infinity),
    firstTime: silent ? 1 : 1 / widest,
  }
}
