/**
 * The plain, readable third-order kernel: every pathway as it is written in the books, one complex number at a time
 * (complex.js), summed over the grid without tables, factorisation or transform. Slow on purpose: it is what the fast
 * kernels are checked against, in the tests and once in every run (`self-check.ts`).
 *
 *   S_R = sum_jk weight exp(-i w1 t1 + i w3 t3) (R2 + R3),  S_N = sum_jk weight exp(+i w1 t1 + i w3 t3) (R1 + R4)
 *   weight = dt^2, halved for j = 0 and for k = 0;  factors exp(-gam(t1+t3) - t2/T1 - sig^2(t3 -/+ t1)^2/2)
 *
 * Source: Mukamel (1995), ch. 8. Numbers: g in 1, times in ps, angular frequencies in rad/ps, S in ps^2.
 */
import { Complex } from 'complex.js'
import { ensembleSigma, homogeneousRate } from './coherence-decay'
import type { LineModel } from './types'

/** g0 at any time >= 0. */
export type Broadening = (timePs: number) => Complex

const sum = (...terms: Complex[]): Complex => terms.reduce((total, term) => total.add(term), new Complex(0, 0))

/** R1..R4 of one triple of times, with all factors. */
export const oraclePathways = (model: LineModel, g: Broadening, t1: number, t2: number, t3: number) => {
  const [a, b, c, d, e, f] = [t1, t2, t3, t1 + t2, t2 + t3, t1 + t2 + t3].map(g) as [
    Complex,
    Complex,
    Complex,
    Complex,
    Complex,
    Complex,
  ]
  const sig = ensembleSigma(model)
  const decay = Math.exp(-homogeneousRate(model) * (t1 + t3) - t2 / model.populationLifetimePs)
  const rephasing = decay * Math.exp(-0.5 * (sig * (t3 - t1)) ** 2)
  const nonRephasing = decay * Math.exp(-0.5 * (sig * (t3 + t1)) ** 2)
  const r1 = sum(a.neg(), b.conjugate().neg(), c.conjugate().neg(), d, e.conjugate(), f.neg())
  const r2 = sum(a.conjugate().neg(), b, c.conjugate().neg(), d.conjugate().neg(), e.neg(), f.conjugate())
  const r3 = sum(a.conjugate().neg(), b.conjugate(), c.neg(), d.conjugate().neg(), e.conjugate().neg(), f.conjugate())
  const r4 = sum(a.neg(), b.neg(), c.neg(), d, e, f.neg())
  return {
    r1: r1.exp().mul(nonRephasing),
    r2: r2.exp().mul(rephasing),
    r3: r3.exp().mul(rephasing),
    r4: r4.exp().mul(nonRephasing),
  }
}

export interface OraclePoint {
  /** Angular frequencies from E0, rad/ps. */
  w1: number
  w3: number
}

/** Both spectra at a few points, from all samples of the grid. */
export const oracleSpectra = (
  model: LineModel,
  g: Broadening,
  grid: { stepPs: number; samples: number; waitingTimePs: number },
  points: readonly OraclePoint[],
): { rephasing: Complex; nonRephasing: Complex }[] => {
  const { stepPs, samples, waitingTimePs } = grid
  const results = points.map(() => ({ rephasing: new Complex(0, 0), nonRephasing: new Complex(0, 0) }))
  for (let j = 0; j < samples; j++) {
    for (let k = 0; k < samples; k++) {
      const t1 = j * stepPs
      const t3 = k * stepPs
      const weight = stepPs * stepPs * (j === 0 ? 0.5 : 1) * (k === 0 ? 0.5 : 1)
      const { r1, r2, r3, r4 } = oraclePathways(model, g, t1, waitingTimePs, t3)
      const rephasing = r2.add(r3).mul(weight)
      const nonRephasing = r1.add(r4).mul(weight)
      results.forEach((result, i) => {
        const { w1, w3 } = points[i]!
        result.rephasing = result.rephasing.add(rephasing.mul(new Complex(0, w3 * t3 - w1 * t1).exp()))
        result.nonRephasing = result.nonRephasing.add(nonRephasing.mul(new Complex(0, w3 * t3 + w1 * t1).exp()))
      })
    }
  }
  return results
}
