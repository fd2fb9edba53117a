import Complex from 'complex.js'
import { describe, expect, it } from 'vitest'
import { powerLawClosedForm, powerLawContinuum } from '../../shared/engine/bath/power-law'
import { digamma, hurwitzZeta, logGamma, trigamma } from '../../shared/engine/complex-functions'
import { angularFrequencyOf, thermalFrequencyOf } from '../../shared/engine/constants'
import { dawson } from '../../shared/engine/faddeeva'
import { buildFrequencyPanels } from '../../shared/engine/frequency-panels'
import { gamma } from '../../shared/engine/gamma'
import { lineBroadeningAt } from '../../shared/engine/line-broadening'
import type { PowerLawTerm } from '../../shared/schemas/parameter-set'
import long from './reference/power-law-broadening-long.json'
import medium from './reference/power-law-broadening-medium.json'
import short from './reference/power-law-broadening-short.json'
import { largest, powerLaw, relativeError } from './support'

interface Case extends Omit<PowerLawTerm, 'kind' | 'cutoffShape'> {
  cutoffShape: string
  temperatureK: number
  timesPs: number[]
  re: number[]
  im: number[]
}

const g0 = (term: PowerLawTerm, temperatureK: number, timesPs: number[]) =>
  lineBroadeningAt({ bath: [term], modes: [] }, temperatureK, Float64Array.from(timesPs))

describe('g0 of the power law against mpmath quadrature of its definition', () => {
  for (const [regime, cases, bound] of [
    // Bounds on the error of Re relative to |Re g0| and of Im relative to |g0|; about four times the largest found.
    ['short times', short.cases, 1e-13],
    ['medium times', medium.cases, 1e-13],
    ['long times', long.cases, 1e-13],
  ] as [string, Case[], number][]) {
    it(`${regime}: below ${bound}`, () => {
      expect(cases.length).toBeGreaterThan(10)
      for (const { temperatureK, timesPs, re, im, ...term } of cases) {
        const found = g0(
          { ...term, kind: 'powerLaw', cutoffShape: term.cutoffShape as 'gaussian' },
          temperatureK,
          timesPs,
        )
        timesPs.forEach((time, index) => {
          const where = `${JSON.stringify(term)} at ${temperatureK} K, ${time} ps`
          const size = Math.hypot(re[index]!, im[index]!)
          expect(relativeError(found.re[index]!, re[index]!), `Re, ${where}`).toBeLessThan(bound)
          expect(relativeError(found.im[index]!, im[index]!, size), `Im, ${where}`).toBeLessThan(bound)
        })
      }
    })
  }
})

/** Textbook closed forms with exponential cutoff: Leggett et al. (1987) for p = 1, and the same expansion for the others. */
const textbook = (exponent: number, x: number, nu: number, beta: number): [number, number] => {
  const one = new Complex(1 + nu, 0)
  const z = new Complex(1 + nu, beta)
  const d = 1 + x * x
  if (exponent === 1) {
    return [Math.log(d) / 2 + 2 * logGamma(one).re - 2 * logGamma(z).re, Math.atan(x)]
  }
  if (exponent === 2) return [(x * x) / d + 2 * nu * (digamma(z).re - digamma(one).re), x / d]
  if (exponent === 3) {
    return [1 - (1 - x * x) / (d * d) + 2 * nu * nu * (trigamma(one).re - trigamma(z).re), (2 * x) / (d * d)]
  }
  const s = exponent - 1
  const power = new Complex(1, -x).pow(new Complex(-s, 0))
  const zeta = hurwitzZeta(s, one).re - hurwitzZeta(s, z).re
  const size = s > 0 ? gamma(s) : gamma(s + 1) / s
  return [size * (1 - power.re + 2 * Math.pow(nu, s) * zeta), size * power.im]
}

describe('closed forms', () => {
  const times = [0.01, 0.2, 1.7, 9, 80]
  for (const exponent of [0.5, 1, 1.5, 2, 2.5, 3, 4.7, 6]) {
    it(`exponential cutoff, p = ${exponent}, at 4, 77 and 600 K`, () => {
      const term = powerLaw({ exponent, cutoffShape: 'exponential', cutoffEnergyMeV: 1.7 })
      const wc = angularFrequencyOf(1.7)
      for (const temperature of [4, 77, 600]) {
        const found = g0(term, temperature, times)
        const th = thermalFrequencyOf(temperature)
        times.forEach((time, index) => {
          const [re, im] = textbook(exponent, wc * time, th / wc, th * time)
          // The textbook differences cancel at small times: compared with max(1, |g0|) of the largest part, 2 nu^s zeta.
          const floor = Math.max(1, 2 * Math.pow(th / wc, exponent - 1))
          expect(relativeError(found.re[index]!, 0.5 * re, floor)).toBeLessThan(1e-12)
          expect(relativeError(found.im[index]!, 0.5 * im, 1)).toBeLessThan(1e-13)
        })
      }
    })
  }

  it('Gaussian cutoff, p = 3, T = 0: Dawson integral', () => {
    const wc = angularFrequencyOf(2)
    const found = g0(powerLaw(), 0, times)
    times.forEach((time, index) => {
      const x = wc * time
      expect(relativeError(found.re[index]!, 0.5 * (x / 2) * dawson(x / 2), 0.1)).toBeLessThan(1e-13)
      expect(
        relativeError(found.im[index]!, 0.5 * (Math.sqrt(Math.PI) / 4) * x * Math.exp((-x * x) / 4), 0.1),
      ).toBeLessThan(1e-13)
    })
  })

  it('agree with quadrature over the whole range of parameters', () => {
    const errors: number[] = []
    for (const exponent of [0.01, 0.3, 0.999999, 1 + 1e-9, 1.9999, 2.3, 6]) {
      for (const cutoffEnergyMeV of [1e-3, 0.5, 100, 1000]) {
        for (const temperature of [0, 0.01, 77, 600]) {
          const term = powerLaw({ exponent, cutoffEnergyMeV, cutoffShape: 'exponential' })
          const th = thermalFrequencyOf(temperature)
          const closed = powerLawClosedForm(term, th)!
          const panels = buildFrequencyPanels([powerLawContinuum(term)], th, 1000)
          for (const time of [1e-5, 0.01, 1, 33, 1000]) {
            const [a, b] = [new Float64Array(2), new Float64Array(2)]
            closed.addAt(time, a)
            panels.addAt(time, b)
            errors.push(Math.hypot(a[0]! - b[0]!, a[1]! - b[1]!) / Math.max(1, Math.hypot(...b)))
          }
        }
      }
    }
    expect(largest(errors)).toBeLessThan(1e-13)
  })
})
