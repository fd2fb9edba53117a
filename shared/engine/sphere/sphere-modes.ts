/**
 * Vibrations of an elastic sphere: free, core-shell, or embedded in an infinite matrix.
 *
 * A free surface gives real frequencies; a matrix takes energy away, so its modes are w - i/tau with a time factor
 * exp(-i w t - t/tau) and their number n only orders them by frequency. Embedded modes are listed when they lose less
 * than one radian's worth of amplitude a radian (1/tau < w), up to a fixed window in frequency.
 * Source: Lamb, Proc. London Math. Soc. 13, 189 (1881) and the sources named in the modules used.
 */
import Complex from 'complex.js'
import { HBAR_MEV_PS } from '../constants'
import { findComplexRoots } from './complex-roots'
import { spheroidalEigenvalues, torsionalEigenvalues } from './free-sphere'
import { secularDeterminant } from './layered-sphere'
import type { LayeredSphere, Medium, SphereFamily, SphereMode } from './medium'
import { findRoots } from './roots'

const CM_PER_M = 100
const LIGHT_M_PER_S = 299_792_458

/** A mode from its eigenvalue w R / v_T (core radius, core velocity) in every unit people ask for. */
const toMode = (
  family: SphereFamily,
  l: number,
  n: number,
  eigenvalue: { re: number; im: number },
  radPerPsUnit: number,
): SphereMode => {
  const radPerPs = eigenvalue.re * radPerPsUnit
  const frequencyHz = (radPerPs * 1e12) / (2 * Math.PI)
  return {
    family,
    l,
    n,
    radPerPs,
    decayPerPs: Math.max(0, -eigenvalue.im * radPerPsUnit),
    energyMeV: HBAR_MEV_PS * radPerPs,
    wavenumberPerCm: frequencyHz / (LIGHT_M_PER_S * CM_PER_M),
    frequencyGHz: frequencyHz * 1e-9,
  }
}

const checkMedium = (name: string, medium: Medium): void => {
  for (const [key, value] of Object.entries(medium)) {
    if (!(Number.isFinite(value) && value > 0)) {
      throw new RangeError(`${name}.${key}: expected a number above 0; found ${value}`)
    }
  }
  const ratio = medium.longitudinalVelocityMPerS / medium.transverseVelocityMPerS
  if (!(ratio > Math.sqrt(4 / 3))) {
    throw new RangeError(
      `${name}: expected a longitudinal velocity above sqrt(4/3) = 1.155 times the transverse one (positive bulk modulus); found ${ratio.toPrecision(4)} times`,
    )
  }
}

const embeddedRoots = (sphere: LayeredSphere, family: SphereFamily, l: number, count: number): Complex[] => {
  const f = secularDeterminant(sphere, family, l)
  const found: Complex[] = []
  // Tiles upward in frequency, each as deep as modes are listed; the zero frequency itself is a pole and stays outside.
  for (let reMin = 0.25; reMin < 60 && found.length < count; reMin += 2.5) {
    const reMax = reMin + 2.5
    const tile = findComplexRoots(f, { reMin, reMax, imMin: -reMax, imMax: 0.03 })
    found.push(...tile.filter((root) => -root.im < root.re))
  }
  return found.slice(0, count)
}

/**
 * First `count` modes of one family and angular order l (torsional: l >= 1, spheroidal: l >= 0).
 * Throws RangeError naming the field when a constant is not physical.
 */
export const sphereModes = (sphere: LayeredSphere, family: SphereFamily, l: number, count: number): SphereMode[] => {
  if (!(sphere.radiusNm > 0)) throw new RangeError(`radiusNm: expected a number above 0; found ${sphere.radiusNm}`)
  checkMedium('core', sphere.core)
  if (sphere.shell) checkMedium('shell', sphere.shell)
  if (sphere.matrix) checkMedium('matrix', sphere.matrix)
  if (family === 'torsional' && l < 1) throw new RangeError(`l: expected l >= 1 for torsional modes; found ${l}`)
  const { core } = sphere
  // m/s over nm is 1e9 1/s, that is 1e-3 1/ps.
  const unit = (core.transverseVelocityMPerS / sphere.radiusNm) * 1e-3
  const eigenvalues = sphere.matrix
    ? embeddedRoots(sphere, family, l, count)
    : freeEigenvalues(sphere, family, l, count).map((re) => ({ re, im: 0 }))
  return eigenvalues.map((eigenvalue, n) => toMode(family, l, n, eigenvalue, unit))
}

const freeEigenvalues = (sphere: LayeredSphere, family: SphereFamily, l: number, count: number): number[] => {
  const { core, shell } = sphere
  if (!shell) {
    if (family === 'torsional') return torsionalEigenvalues(l, count)
    return spheroidalEigenvalues(core.longitudinalVelocityMPerS / core.transverseVelocityMPerS, l, count)
  }
  const f = secularDeterminant(sphere, family, l)
  // The larger sphere and the slower medium bring the modes closer together and further down.
  const outer = 1 + shell.thicknessNm / sphere.radiusNm
  const slow = Math.min(1, shell.transverseVelocityMPerS / core.transverseVelocityMPerS)
  const scale = slow / outer
  return findRoots((eta) => f(new Complex(eta, 0)).re, { from: 0.1 * scale, step: 0.03 * scale, count })
}
