import { describe, expect, it } from 'vitest'
import { moments, zeroPhononWeight } from '../../shared/engine/bath-integrals'
import { readFormula } from '../../shared/engine/bath/expression'
import { lineBroadening, lineBroadeningAt } from '../../shared/engine/line-broadening'
import { BathTermSchema, type BathTerm, type ExpressionTerm } from '../../shared/schemas/parameter-set'
import fixture from './reference/expression-broadening.json'
import { largest, powerLaw, relativeError } from './support'

const typed = (formula: string): ExpressionTerm => ({ kind: 'expression', formula })
const alone = (term: BathTerm) => ({ bath: [term], modes: [] })

describe('typed spectral density', () => {
  it('equals mpmath quadrature of the same formula within 2e-12', () => {
    expect(fixture.cases).toHaveLength(6)
    for (const { term, temperatureK, timesPs, re, im } of fixture.cases) {
      const found = lineBroadeningAt(alone(BathTermSchema.parse(term)), temperatureK, Float64Array.from(timesPs))
      timesPs.forEach((time, index) => {
        const where = `${term.formula}, ${temperatureK} K, ${time} ps`
        const size = Math.hypot(re[index]!, im[index]!)
        expect(relativeError(found.re[index]!, re[index]!, 1e-2 * size), where).toBeLessThan(2e-12)
        expect(relativeError(found.im[index]!, im[index]!, 1e-2 * size), where).toBeLessThan(2e-12)
      })
    }
  })

  for (const [formula, term] of [
    ['pi*0.5*E^3/4*exp(-(E/2)^2)', powerLaw()],
    ['pi*0.5*E^1.5/1.7^0.5*exp(-E/1.7)', powerLaw({ exponent: 1.5, cutoffEnergyMeV: 1.7, cutoffShape: 'exponential' })],
    ['2*5*E*0.4/(E^2+0.4^2)', { kind: 'overdamped', reorganizationEnergyMeV: 5, relaxationEnergyMeV: 0.4 }],
    [
      '2*0.3*4^3*E*0.9/((4^2-E^2)^2+E^2*0.9^2)',
      { kind: 'underdamped', huangRhys: 0.3, energyMeV: 4, dampingEnergyMeV: 0.9 },
    ],
    [
      '0.4*E*sqrt(pi/2)/0.2*exp(-log(E/3)^2/(2*0.2^2))',
      { kind: 'logNormal', huangRhys: 0.4, energyMeV: 3, relativeWidth: 0.2 },
    ],
  ] as [string, BathTerm][]) {
    it(`${formula} gives the g0, the weight and the moments of the kind it spells out`, () => {
      for (const temperatureK of [0, 77]) {
        const grid = { stepPs: 0.02, samples: 2000 }
        const a = lineBroadening(alone(typed(formula)), temperatureK, grid)
        const b = lineBroadening(alone(term), temperatureK, grid)
        const errors = Array.from(a.re, (re, j) => {
          const size = Math.max(1, Math.hypot(b.re[j]!, b.im[j]!))
          return Math.hypot(re - b.re[j]!, a.im[j]! - b.im[j]!) / size
        })
        expect(largest(errors)).toBeLessThan(1e-11)
        expect(largest(errors)).toBeLessThanOrEqual(a.errorEstimate + b.errorEstimate)
        const [typedWeight, weight] = [
          zeroPhononWeight(alone(typed(formula)), temperatureK),
          zeroPhononWeight(alone(term), temperatureK),
        ]
        if (weight.weight === null) expect(typedWeight.weight).toBeNull()
        else expect(relativeError(typedWeight.weight!, weight.weight)).toBeLessThan(1e-12)
        if (weight.thermalWidthMeV !== null) {
          expect(relativeError(typedWeight.thermalWidthMeV!, weight.thermalWidthMeV)).toBeLessThan(1e-9)
        }
        for (const [key, value] of Object.entries(moments(alone(term), temperatureK))) {
          const found = moments(alone(typed(formula)), temperatureK)[key as 'varianceMeV2']
          if (value === null) expect(found, key).toBeNull()
          else expect(relativeError(found!, value as number), key).toBeLessThan(1e-10)
        }
      }
    })
  }

  it('finds its low-energy exponent', () => {
    const exponentOf = (formula: string) => readFormula(formula).lowEnergyExponent
    expect(exponentOf('E^3*exp(-E)')).toBe(3)
    expect(exponentOf('sqrt(E)*exp(-E)')).toBe(0.5)
    expect(exponentOf('sin(E)^2*exp(-E)')).toBe(2)
    expect(exponentOf('exp(-1/E)*exp(-E)')).toBe(Infinity)
    expect(exponentOf('E^1.2345*exp(-E)')).toBeCloseTo(1.2345, 9)
  })

  it('may be 0', () => {
    expect(zeroPhononWeight(alone(typed('0')), 300).weight).toBe(1)
    expect(
      lineBroadening(alone(typed('0 * E')), 300, { stepPs: 0.1, samples: 400 }).re.every((value) => value === 0),
    ).toBe(true)
  })
})

describe('formulas are parsed, never run', () => {
  for (const [formula, message] of [
    ['import("fs")', 'found the function "import"'],
    ['constructor', 'found the name "constructor"'],
    ['E.constructor', 'found "E'],
    ['toString(E)', 'found the function "toString"'],
    ['f(x) = x', 'found "f(x) = x"'],
    ['E = 3', 'found "E = 3"'],
    ['E; E', 'found'],
    ['[E, E]', 'found "[E, E]"'],
    ['exp(E, 2)', 'found 2 arguments of "exp"'],
    ['E!', 'found the operator in "E!"'],
    ['"E"', 'found ""E""'],
    ['E^3*exp(-E)+', 'could not be read: Unexpected end of expression'],
    ['exp(-E)', 'vanishes at E = 0 as a positive power of E; found E^0'],
    ['E*log(E)', 'expected a spectral density of 0 or more at every energy; found -'],
    ['E', 'falls off with E, so that the reorganisation energy is finite; found 1000000000000 meV'],
    ['1/(1-E)', 'expected a spectral density of 0 or more at every energy; found -'],
    ['', 'found an empty text'],
    ['E'.repeat(501), 'at most 500 characters'],
  ] as const) {
    it(`refuses ${formula.slice(0, 20) || 'an empty text'}`, () => {
      const { error } = BathTermSchema.safeParse(typed(formula))
      expect(error!.issues[0]!.path).toEqual(['formula'])
      expect(error!.issues[0]!.message).toContain(message)
    })
  }

  it('refuses what is no text', () => {
    const { error } = BathTermSchema.safeParse({ kind: 'expression', formula: 3 })
    expect(error!.issues[0]).toMatchObject({ path: ['formula'], message: 'expected a formula of E as a text' })
  })
})
