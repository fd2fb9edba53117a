import { describe, expect, it } from 'vitest'
import { HBAR_MEV_PS, occupationOf } from '../../shared/engine/constants'
import { coherenceRates, type BrightState, type FineStructure } from '../../shared/engine/fine-structure/model'
import {
  fineStructureResponse,
  pathwayTerms,
  type Broadening,
  type Weight,
} from '../../shared/engine/fine-structure/pathways'
import { propagateLiouvillian } from './support/liouvillian'
import { sumOverVibronicStates } from './support/vibronic-sum'

const state = (energyMeV: number, dipole: [number, number, number], extra: Partial<BrightState> = {}): BrightState => ({
  label: '',
  energyMeV,
  dipole,
  amplitude: 1,
  lifetimePs: Infinity,
  ...extra,
})

/** Molecules held still, every pulse along x: the weight is the product of the x components. */
const alongX: Weight = (a, b, c, d) => a[0] * b[0] * c[0] * d[0]
const noBath: Broadening = () => [0, 0]

const times = [
  [0, 0, 0],
  [0.3, 0, 0.5],
  [0.7, 1.3, 0.2],
  [0.05, 4.1, 0.9],
  [2.2, 0.4, 1.7],
] as const

describe('fine structure without a bath', () => {
  // A 16 x 16 Liouvillian (ground and three bright states) with decay to the ground state and pure dephasing of
  // Lindblad form, propagated by its matrix exponential; commutators select the phase-matched signals.
  it('equals density-matrix propagation', () => {
    const system: FineStructure = {
      states: [
        state(1998.6, [1, 0, 0], { lifetimePs: 8 }),
        state(2000.1, [0.6, 0.8, 0], { lifetimePs: 3 }),
        state(2001.9, [-0.5, 0.1, 0.3], { lifetimePs: 20 }),
      ],
      // Independent fluctuations of amplitude a_k: widths a_k^2 to the ground state, (a_k - a_l)^2 between states.
      coherenceDephasingMeV: [0.5, -0.3, 0.9].map((ak, k, list) =>
        list.map((al, l) => (k === l ? ak * ak : (ak - al) ** 2)),
      ),
    }
    const respond = fineStructureResponse(system, alongX, noBath, 2000)
    for (const [t1, t2, t3] of times) {
      const expected = propagateLiouvillian(
        {
          frequencies: system.states.map((s) => (s.energyMeV - 2000) / HBAR_MEV_PS),
          dipoles: system.states.map((s) => s.dipole[0]),
          decay: system.states.map((s) => 1 / s.lifetimePs),
          // d rho/dt = D[F] rho with F = sum_k f_k |k><k| dephases k-0 at f_k^2/2 and k-l at (f_k - f_l)^2/2.
          fluctuation: [0.5, -0.3, 0.9].map((a) => a / Math.sqrt(HBAR_MEV_PS)),
        },
        [t1, t2, t3],
      )
      const found = respond(t1, t2, t3)
      for (const part of [0, 1] as const) {
        expect(Math.abs(found.rephasing[part] - expected.rephasing[part])).toBeLessThan(1e-12)
        expect(Math.abs(found.nonRephasing[part] - expected.nonRephasing[part])).toBeLessThan(1e-12)
      }
    }
  })
})

describe('fine structure with a bath', () => {
  // Harmonic mode displaced by kappa_k sqrt(S) in state k: pathways by multiplying propagators in the number basis.
  it.each([0, 9, 40])('equals the sum over vibronic states at %d K', (temperatureK) => {
    const energyMeV = 1.7
    const huangRhys = 0.45
    const omega = energyMeV / HBAR_MEV_PS
    const n = occupationOf(energyMeV, temperatureK)
    const mode: Broadening = (t) => [
      huangRhys * (2 * n + 1) * (1 - Math.cos(omega * t)),
      huangRhys * Math.sin(omega * t),
    ]
    const system: FineStructure = {
      states: [state(1999.2, [1, 0, 0], { amplitude: 1 }), state(2000.9, [0.7, 0, 0], { amplitude: 1.4 })],
      coherenceDephasingMeV: [
        [0, 0],
        [0, 0],
      ],
    }
    const respond = fineStructureResponse(system, alongX, mode, 2000)
    for (const [t1, t2, t3] of times) {
      const expected = sumOverVibronicStates(
        {
          frequencies: system.states.map((s) => (s.energyMeV - 2000) / HBAR_MEV_PS),
          dipoles: system.states.map((s) => s.dipole[0]),
          displacements: system.states.map((s) => s.amplitude * Math.sqrt(huangRhys)),
          omega,
          boltzmann: n > 0 ? n / (n + 1) : 0,
        },
        [t1, t2, t3],
      )
      const found = respond(t1, t2, t3)
      for (const part of [0, 1] as const) {
        expect(Math.abs(found.rephasing[part] - expected.rephasing[part])).toBeLessThan(1e-9)
        expect(Math.abs(found.nonRephasing[part] - expected.nonRephasing[part])).toBeLessThan(1e-9)
      }
    }
  })
})

describe('rates of coherences', () => {
  it('adds half of each decay rate to the pure dephasing', () => {
    const rates = coherenceRates({
      states: [state(1, [1, 0, 0], { lifetimePs: 2 }), state(2, [1, 0, 0], { lifetimePs: 5 })],
      coherenceDephasingMeV: [
        [0.4, 0.3],
        [0.3, 0.6],
      ],
    })
    const rate = (width: number) => width / (2 * HBAR_MEV_PS)
    expect(rates.optical[0]).toBeCloseTo(0.25 + rate(0.4), 12)
    expect(rates.betweenStates[1]).toBeCloseTo((0.5 + 0.2) / 2 + rate(0.3), 12)
    expect(rates.betweenStates[3]).toBeCloseTo(0.2, 12)
  })

  it.each([
    [
      [
        [0.1, 0.5],
        [0.5, 0.1],
      ],
      'positive semidefinite',
    ],
    [
      [
        [0.1, 0.1],
        [0.2, 0.1],
      ],
      'expected the same value',
    ],
    [
      [
        [0.1, -0.1],
        [-0.1, 0.1],
      ],
      '0 meV or more; found -0.1',
    ],
    [[[0.1]], '2 x 2 matrix'],
  ])('refuses %j', (coherenceDephasingMeV, message) => {
    const states = [state(1, [1, 0, 0]), state(2, [0, 1, 0])]
    expect(() => coherenceRates({ states, coherenceDephasingMeV })).toThrow(message)
  })

  it('accepts the limits: fully correlated and fully anticorrelated fluctuations', () => {
    const states = [state(1, [1, 0, 0]), state(2, [0, 1, 0])]
    for (const between of [0, 0.4]) {
      expect(() =>
        coherenceRates({
          states,
          coherenceDephasingMeV: [
            [0.1, between],
            [between, 0.1],
          ],
        }),
      ).not.toThrow()
    }
    expect(() =>
      coherenceRates({
        states,
        coherenceDephasingMeV: [
          [0.1, 0.41],
          [0.41, 0.1],
        ],
      }),
    ).toThrow()
  })
})

describe('terms', () => {
  it('leaves out what the polarisations forbid', () => {
    const system: FineStructure = {
      states: [state(1, [1, 0, 0]), state(2, [0, 1, 0])],
      coherenceDephasingMeV: [
        [0, 0],
        [0, 0],
      ],
    }
    const terms = pathwayTerms(system, alongX)
    expect(terms.map((term) => [term.kind, term.k, term.l])).toEqual([
      ['rephasingBleach', 0, 0],
      ['nonRephasingBleach', 0, 0],
      ['rephasingPopulation', 0, 0],
      ['nonRephasingPopulation', 0, 0],
    ])
  })
})
