/**
 * The four third-order response pathways of one transition, from the line-broadening function alone.
 *
 *   SE rephasing       R2 = exp[-g*(t1) + g(t2)  - g*(t3) - g*(t1+t2) - g(t2+t3)  + g*(s)]
 *   GSB rephasing      R3 = exp[-g*(t1) + g*(t2) - g(t3)  - g*(t1+t2) - g*(t2+t3) + g*(s)]
 *   SE non-rephasing   R1 = exp[-g(t1)  - g*(t2) - g*(t3) + g(t1+t2)  + g*(t2+t3) - g(s)]
 *   GSB non-rephasing  R4 = exp[-g(t1)  - g(t2)  - g(t3)  + g(t1+t2)  + g(t2+t3)  - g(s)],   s = t1 + t2 + t3
 *
 * with g = g0 in the frame rotating at E0 (putting g0 for g changes no pathway), times exp(-gam (t1 + t3)), exp(-t2/T1)
 * and exp(-sig^2 (t3 -/+ t1)^2/2) for rephasing / non-rephasing.
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | t1, t2, t3 | timesPs | ps | [points][3] |
 * | R1..R4 | r1..r4 | 1 | [points] |
 *
 * Source: Mukamel (1995), ch. 8; Hamm & Zanni (2011), ch. 7. Checked against sums over vibrational states in
 * tests/engine/sum-over-states.spec.ts (1e-8).
 */
import { ensembleSigma, homogeneousRate } from './coherence-decay'
import { lineBroadeningAt } from './line-broadening'
import type { ComplexSeries, LineModel } from './types'

export interface Pathways {
  r1: ComplexSeries
  r2: ComplexSeries
  r3: ComplexSeries
  r4: ComplexSeries
}

/** g0 at the six time arguments of a pathway: t1, t2, t3, t1+t2, t2+t3, t1+t2+t3. */
export interface SixTimes {
  re: ArrayLike<number>
  im: ArrayLike<number>
}

type Signs = readonly [number, number, number, number, number, number]

/** Signs of Re g and of Im g at the six arguments. */
const pathwaySigns: Record<keyof Pathways, { re: Signs; im: Signs }> = {
  r1: { re: [-1, -1, -1, 1, 1, -1], im: [-1, 1, 1, 1, -1, -1] },
  r2: { re: [-1, 1, -1, -1, -1, 1], im: [1, 1, 1, 1, -1, -1] },
  r3: { re: [-1, 1, -1, -1, -1, 1], im: [1, -1, -1, 1, 1, -1] },
  r4: { re: [-1, -1, -1, 1, 1, -1], im: [-1, -1, -1, 1, 1, -1] },
}

/** Logarithm of the bare pathway (no homogeneous, ensemble or population factor), as [real, imaginary]. */
export const pathwayLogarithm = (pathway: keyof Pathways, g: SixTimes): [number, number] => {
  const { re, im } = pathwaySigns[pathway]
  let real = 0
  let imaginary = 0
  for (let k = 0; k < 6; k++) {
    real += re[k]! * g.re[k]!
    imaginary += im[k]! * g.im[k]!
  }
  return [real, imaginary]
}

export const isRephasing = (pathway: keyof Pathways): boolean => pathway === 'r2' || pathway === 'r3'

/** The four pathways, with all factors, at any triples of times >= 0. */
export const thirdOrderPathways = (
  model: LineModel,
  timesPs: readonly (readonly [number, number, number])[],
): Pathways => {
  const arguments_ = new Float64Array(6 * timesPs.length)
  timesPs.forEach(([t1, t2, t3], i) => {
    arguments_.set([t1, t2, t3, t1 + t2, t2 + t3, t1 + t2 + t3], 6 * i)
  })
  const g = lineBroadeningAt(model, model.temperatureK, arguments_)
  const gam = homogeneousRate(model)
  const sig = ensembleSigma(model)
  const values = (pathway: keyof Pathways): ComplexSeries => {
    const re = new Float64Array(timesPs.length)
    const im = new Float64Array(timesPs.length)
    timesPs.forEach(([t1, t2, t3], i) => {
      const six = { re: g.re.subarray(6 * i, 6 * i + 6), im: g.im.subarray(6 * i, 6 * i + 6) }
      const [real, imaginary] = pathwayLogarithm(pathway, six)
      const spread = isRephasing(pathway) ? t3 - t1 : t3 + t1
      const size = Math.exp(real - gam * (t1 + t3) - t2 / model.populationLifetimePs - 0.5 * (sig * spread) ** 2)
      re[i] = size * Math.cos(imaginary)
      im[i] = size * Math.sin(imaginary)
    })
    return { re, im }
  }
  return { r1: values('r1'), r2: values('r2'), r3: values('r3'), r4: values('r4') }
}
