import { describe, expect, it } from 'vitest'
import { angularFrequencyOf, BOLTZMANN_MEV_PER_K } from '../../shared/engine/constants'
import { thirdOrderPathways } from '../../shared/engine/third-order'
import { adjoint, identity, multiply, trace, zeros, type Matrix } from './support/complex-matrix'
import { lineModel } from './support/line-model'
import { largest } from './support'

/**
 * The response as sums over vibrational states, without line-broadening functions: the ground and the excited state have
 * the same ladder, displaced by sqrt(S); every pathway is a trace over the thermal ladder (Mukamel 1995, ch. 5 and 8).
 */
interface Ladder {
  energyMeV: number
  huangRhys: number
  levels: number
}

/** <m|D|n>, from D = exp(sqrt(S)(b^+ - b)) and b D = D (b + sqrt(S)). */
const overlap = ({ huangRhys, levels }: Ladder): Matrix => {
  const out = zeros(levels)
  const d = Math.sqrt(huangRhys)
  const at = (m: number, n: number) => m * levels + n
  out.re[0] = Math.exp(-huangRhys / 2)
  for (let n = 1; n < levels; n++) out.re[at(0, n)] = (-d * out.re[at(0, n - 1)]!) / Math.sqrt(n)
  for (let m = 1; m < levels; m++) {
    for (let n = 0; n < levels; n++) {
      const lower = n > 0 ? Math.sqrt(n) * out.re[at(m - 1, n - 1)]! : 0
      out.re[at(m, n)] = (lower + d * out.re[at(m - 1, n)]!) / Math.sqrt(m)
    }
  }
  return out
}

const kronecker = (a: Matrix, b: Matrix): Matrix => {
  const size = a.size * b.size
  const out = zeros(size)
  for (let i = 0; i < size; i++) {
    for (let k = 0; k < size; k++) {
      const p = Math.floor(i / b.size) * a.size + Math.floor(k / b.size)
      const q = (i % b.size) * b.size + (k % b.size)
      out.re[i * size + k] = a.re[p]! * b.re[q]! - a.im[p]! * b.im[q]!
      out.im[i * size + k] = a.re[p]! * b.im[q]! + a.im[p]! * b.re[q]!
    }
  }
  return out
}

const diagonal = (levels: number, of: (n: number) => [number, number]): Matrix => {
  const out = zeros(levels)
  for (let n = 0; n < levels; n++) [out.re[n * levels + n], out.im[n * levels + n]] = of(n)
  return out
}

/** exp(-iHt) of the ground ladder, of the excited ladder (from its own zero-phonon level), and the thermal state. */
const stateSpace = (ladders: Ladder[], temperatureK: number) => {
  const all = (of: (ladder: Ladder) => Matrix) => ladders.map(of).reduce(kronecker, identity(1))
  const rotation = (t: number) => (ladder: Ladder) =>
    diagonal(ladder.levels, (n) => {
      const phase = -angularFrequencyOf(ladder.energyMeV) * n * t
      return [Math.cos(phase), Math.sin(phase)]
    })
  const ground = (t: number) => all(rotation(t))
  const franckCondon = all(overlap)
  const excited = (t: number) => multiply(franckCondon, multiply(all(rotation(t)), adjoint(franckCondon)))
  const thermal = all((ladder) => {
    const ratio = temperatureK > 0 ? Math.exp(-ladder.energyMeV / (BOLTZMANN_MEV_PER_K * temperatureK)) : 0
    return diagonal(ladder.levels, (n) => [(1 - ratio) * ratio ** n, 0])
  })
  return { ground, excited, thermal }
}

const pathwaysOf = (ladders: Ladder[], temperatureK: number, [t1, t2, t3]: readonly [number, number, number]) => {
  const { ground, excited, thermal } = stateSpace(ladders, temperatureK)
  const chain = (...matrices: Matrix[]) => trace(matrices.reduce(multiply))
  return {
    r1: chain(
      excited(t3),
      excited(t2),
      excited(t1),
      thermal,
      adjoint(ground(t1)),
      adjoint(excited(t2)),
      adjoint(ground(t3)),
    ),
    r2: chain(
      excited(t3),
      excited(t2),
      ground(t1),
      thermal,
      adjoint(excited(t1)),
      adjoint(excited(t2)),
      adjoint(ground(t3)),
    ),
    r3: chain(
      excited(t3),
      ground(t2),
      ground(t1),
      thermal,
      adjoint(excited(t1)),
      adjoint(ground(t2)),
      adjoint(ground(t3)),
    ),
    r4: chain(
      excited(t3),
      ground(t2),
      excited(t1),
      thermal,
      adjoint(ground(t1)),
      adjoint(ground(t2)),
      adjoint(ground(t3)),
    ),
  }
}

const times = [
  [0, 0, 0.3],
  [0.4, 0, 0.2],
  [0.05, 0.11, 0.07],
  [0.31, 0.8, 0.45],
] as const

/** Levels are counted until the thermal tail and the displaced states are below 1e-10. */
const cases: [string, Ladder[], number][] = [
  ['one mode at 0 K', [{ energyMeV: 4, huangRhys: 0.7, levels: 24 }], 0],
  ['one mode at 10 K', [{ energyMeV: 4, huangRhys: 0.4, levels: 28 }], 10],
  ['one mode at 77 K', [{ energyMeV: 12, huangRhys: 0.25, levels: 34 }], 77],
  ['one mode at 300 K', [{ energyMeV: 26, huangRhys: 1, levels: 60 }], 300],
  [
    'two modes at 0 K',
    [
      { energyMeV: 4, huangRhys: 0.15, levels: 12 },
      { energyMeV: 26, huangRhys: 0.1, levels: 10 },
    ],
    0,
  ],
  [
    'two modes at 60 K',
    [
      { energyMeV: 14, huangRhys: 0.2, levels: 14 },
      { energyMeV: 26, huangRhys: 0.1, levels: 9 },
    ],
    60,
  ],
]

describe('third-order pathways', () => {
  it.each(cases)('equal sums over vibrational states: %s', (_, ladders, temperatureK) => {
    const model = lineModel({
      temperatureK,
      zeroPhononFwhmMeV: 0,
      modes: ladders.map(({ energyMeV, huangRhys }) => ({ label: '', energyMeV, huangRhys })),
    })
    const found = thirdOrderPathways(model, times)
    const errors = times.flatMap((triple, i) =>
      Object.entries(pathwaysOf(ladders, temperatureK, triple)).map(([key, [re, im]]) => {
        const { re: foundRe, im: foundIm } = found[key as keyof typeof found]
        return Math.hypot(foundRe[i]! - re, foundIm[i]! - im)
      }),
    )
    expect(errors).toHaveLength(16)
    expect(largest(errors)).toBeLessThan(1e-8)
  })
})
