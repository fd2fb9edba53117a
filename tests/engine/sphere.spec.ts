import Complex from 'complex.js'
import { describe, expect, it } from 'vitest'
import { HBAR_MEV_PS } from '../../shared/engine/constants'
import { findComplexRoots } from '../../shared/engine/sphere/complex-roots'
import { spheroidalEigenvalues, torsionalEigenvalues } from '../../shared/engine/sphere/free-sphere'
import { findRoots } from '../../shared/engine/sphere/roots'
import { sphereModes } from '../../shared/engine/sphere/sphere-modes'
import free from './reference/sphere-free.json'
import layered from './reference/sphere.json'

const CDSE = { densityKgPerM3: 5810, longitudinalVelocityMPerS: 3700, transverseVelocityMPerS: 1540 }
const CDS = { densityKgPerM3: 4820, longitudinalVelocityMPerS: 4250, transverseVelocityMPerS: 1860 }
const SILICA = { densityKgPerM3: 2200, longitudinalVelocityMPerS: 5950, transverseVelocityMPerS: 3760 }

const spheres = {
  'free CdSe 2 nm': { radiusNm: 2, core: CDSE },
  'CdSe 2 nm, CdS shell 1 nm, free': { radiusNm: 2, core: CDSE, shell: { ...CDS, thicknessNm: 1 } },
  'CdSe 2 nm in silica': { radiusNm: 2, core: CDSE, matrix: SILICA },
  'CdS 3.3 nm in silica': { radiusNm: 3.3, core: CDS, matrix: SILICA },
}

const family = (name: string) => name as 'torsional' | 'spheroidal'
const relative = (found: number, expected: number) => Math.abs(found - expected) / Math.abs(expected)

interface Eigenvalue {
  velocityRatio?: number
  l: number
  n: number
  eigenvalueX: number
}

describe('free sphere', () => {
  // Roots of the secular equation (mpmath), cross-checked by Rayleigh-Ritz; Lamb 1881.
  const modesOf = (quantity: string) =>
    free.cases.find((entry) => entry.quantity === quantity)!.values.modes as unknown as Eigenvalue[]

  it('has the torsional eigenvalues', () => {
    const modes = modesOf('sphereTorsionalEigenvalues')
    expect(modes.length).toBeGreaterThan(5)
    for (const { l, n, eigenvalueX } of modes) {
      expect(relative(torsionalEigenvalues(l, n + 1)[n]!, eigenvalueX)).toBeLessThan(1e-12)
    }
  })

  it('has the spheroidal eigenvalues at every velocity ratio', () => {
    const modes = modesOf('sphereSpheroidalEigenvalues')
    expect(modes.length).toBeGreaterThan(20)
    for (const { velocityRatio, l, n, eigenvalueX } of modes) {
      expect(relative(spheroidalEigenvalues(velocityRatio!, l, n + 1)[n]!, eigenvalueX)).toBeLessThan(1e-12)
    }
  })

  it('reports energies, wavenumbers and frequencies of a sphere in nm and m/s', () => {
    const reference = free.cases.find((entry) => entry.quantity === 'sphereModeEnergies')!
    const modes = reference.values.modes as unknown as {
      family: string
      l: number
      n: number
      energyMeV: number
      wavenumberPerCm: number
      frequencyGHz: number
    }[]
    const sphere = { radiusNm: 3.2, core: CDSE }
    for (const mode of modes) {
      const found = sphereModes(sphere, family(mode.family), mode.l, mode.n + 1)[mode.n]!
      expect(relative(found.energyMeV, mode.energyMeV)).toBeLessThan(1e-10)
      expect(relative(found.wavenumberPerCm, mode.wavenumberPerCm)).toBeLessThan(1e-10)
      expect(relative(found.frequencyGHz, mode.frequencyGHz)).toBeLessThan(1e-10)
      expect(found.energyMeV).toBe(HBAR_MEV_PS * found.radPerPs)
      expect(found.decayPerPs).toBe(0)
    }
  })

  // Lamb 1882 and Love's treatise, digits from memory: eta/pi and xi/pi at Poisson's ratio 1/4 (v_L/v_T = sqrt 3).
  it('reproduces the classical tables', () => {
    const ratio = Math.sqrt(3)
    const breathing = spheroidalEigenvalues(ratio, 0, 4).map((eta) => eta / ratio / Math.PI)
    ;[0.816, 1.9285, 2.9539, 3.9658].forEach((value, n) => expect(breathing[n]).toBeCloseTo(value, 3))
    ;[1.8346, 2.895, 3.9225].forEach((value, n) =>
      expect(torsionalEigenvalues(1, 3)[n]! / Math.PI).toBeCloseTo(value, 3),
    )
    ;[0.84, 1.5487, 2.6513, 3.1131].forEach((value, n) =>
      expect(spheroidalEigenvalues(ratio, 2, 4)[n]! / Math.PI).toBeCloseTo(value, 3),
    )
  })

  // Common practice, no source: few-nanometre semiconductor spheres have their lowest modes between 0.3 and 5 meV.
  it('gives the trade its few meV', () => {
    for (const radiusNm of [1.5, 3, 5]) {
      const energy = sphereModes({ radiusNm, core: CDSE }, 'torsional', 2, 1)[0]!.energyMeV
      expect(energy).toBeGreaterThan(0.3)
      expect(energy).toBeLessThan(5)
    }
  })
})

describe('core-shell and embedded spheres', () => {
  // tests/engine/reference/sphere.py: tractions by numerical differentiation of the potentials, mpmath 30 digits.
  it.each(layered.cases)('$sphere: $family l = $l near $wavenumberPerCm cm^-1', (reference) => {
    const sphere = spheres[reference.sphere as keyof typeof spheres]
    const modes = sphereModes(sphere, family(reference.family), reference.l, 4)
    const nearest = modes.reduce((best, mode) =>
      Math.abs(mode.wavenumberPerCm - reference.wavenumberPerCm) <
      Math.abs(best.wavenumberPerCm - reference.wavenumberPerCm)
        ? mode
        : best,
    )
    expect(relative(nearest.wavenumberPerCm, reference.wavenumberPerCm)).toBeLessThan(1e-11)
    const decay = (nearest.decayPerPs / nearest.radPerPs) * nearest.wavenumberPerCm
    expect(Math.abs(decay - reference.decayPerCm)).toBeLessThan(1e-10)
  })

  // Published complex frequencies of a CdS sphere of 3.3 nm in silica (source paper not identified, from memory).
  it('reproduces published damped modes to their printed digits', () => {
    const sphere = spheres['CdS 3.3 nm in silica']
    const published = [
      { family: 'torsional', l: 1, wavenumberPerCm: 10.6, decayPerCm: 1.5 },
      { family: 'spheroidal', l: 2, wavenumberPerCm: 18.65, decayPerCm: 2.08 },
      { family: 'spheroidal', l: 0, wavenumberPerCm: 21.7, decayPerCm: 3.98 },
    ]
    for (const entry of published) {
      const found = sphereModes(sphere, family(entry.family), entry.l, 2).map((mode) => [
        mode.wavenumberPerCm,
        (mode.decayPerPs / mode.radPerPs) * mode.wavenumberPerCm,
      ])
      expect(
        found.some(([w, d]) => Math.abs(w! - entry.wavenumberPerCm) < 0.05 && Math.abs(d! - entry.decayPerCm) < 0.02),
      ).toBe(true)
    }
  })

  it('a shell of the same material is a larger free sphere', () => {
    const split = { radiusNm: 2, core: CDSE, shell: { ...CDSE, thicknessNm: 1 } }
    const whole = { radiusNm: 3, core: CDSE }
    for (const [name, l] of [
      ['torsional', 1],
      ['torsional', 3],
      ['spheroidal', 0],
      ['spheroidal', 1],
      ['spheroidal', 2],
    ] as const) {
      const expected = sphereModes(whole, name, l, 5)
      sphereModes(split, name, l, 5).forEach((mode, n) => {
        expect(relative(mode.energyMeV, expected[n]!.energyMeV)).toBeLessThan(1e-10)
      })
    }
  })

  it('frequencies fall as 1 / radius', () => {
    const small = sphereModes(spheres['CdSe 2 nm in silica'], 'spheroidal', 2, 3)
    const large = sphereModes({ ...spheres['CdSe 2 nm in silica'], radiusNm: 8 }, 'spheroidal', 2, 3)
    small.forEach((mode, n) => {
      expect(relative(mode.energyMeV, 4 * large[n]!.energyMeV)).toBeLessThan(1e-11)
      expect(relative(mode.decayPerPs, 4 * large[n]!.decayPerPs)).toBeLessThan(1e-10)
    })
  })
})

describe('input', () => {
  it.each([
    [{ radiusNm: 0, core: CDSE }, 'radiusNm: expected a number above 0; found 0'],
    [{ radiusNm: 2, core: { ...CDSE, densityKgPerM3: Number.NaN } }, 'core.densityKgPerM3: expected'],
    [{ radiusNm: 2, core: { ...CDSE, longitudinalVelocityMPerS: 1600 } }, 'positive bulk modulus'],
    [{ radiusNm: 2, core: CDSE, shell: { ...CDS, thicknessNm: -1 } }, 'shell.thicknessNm'],
    [{ radiusNm: 2, core: CDSE, matrix: { ...SILICA, transverseVelocityMPerS: 0 } }, 'matrix.transverseVelocityMPerS'],
  ])('is refused with the field and what is expected', (sphere, message) => {
    expect(() => sphereModes(sphere, 'spheroidal', 2, 1)).toThrow(message)
  })

  it('has no torsional modes of l = 0', () => {
    expect(() => sphereModes({ radiusNm: 2, core: CDSE }, 'torsional', 0, 1)).toThrow('l >= 1')
  })
})

describe('root finders', () => {
  it('does not pass over a close pair of real roots', () => {
    const roots = findRoots((x) => (x - 1.02) * (x - 1.021) * (x - 3), { from: 0.5, step: 0.05, count: 3 })
    ;[1.02, 1.021, 3].forEach((value, index) => expect(roots[index]).toBeCloseTo(value, 12))
  })

  it('finds every zero of a polynomial inside a rectangle and none outside', () => {
    const zeros = [new Complex(1, -0.5), new Complex(1.1, -0.5), new Complex(2, -1.5), new Complex(5, -0.1)]
    const f = (z: Complex) => zeros.reduce((product, zero) => product.mul(z.sub(zero)), new Complex(1, 0))
    const found = findComplexRoots(f, { reMin: 0.2, reMax: 3, imMin: -2, imMax: 0.1 })
    expect(found).toHaveLength(3)
    found.forEach((root, index) => expect(root.sub(zeros[index]!).abs()).toBeLessThan(1e-12))
  })
})
