import { describe, expect, it } from 'vitest'
import { engineQuantities, evaluateRequests, parseRequests } from '../../shared/evaluate/evaluate'
import independent from './reference/independent-values.json'
import simple from './reference/simple-values.json'
import spectra from './reference/spectra.json'
import spheres from './reference/sphere-free.json'

interface Tolerance {
  relative?: number
  absolute?: number
  /** Multiplies the largest value of the spectrum. */
  ofPeak?: number
  /** Values of maps are relative to their maximum already. */
  ofMaximum?: number
}
interface Case {
  id: string
  quantity: string
  parameters: unknown
  samples?: unknown
  values: Record<string, unknown>
  tolerance: Tolerance
}

const cases = [independent, spectra, spheres, simple].flatMap((file) => file.cases as unknown as Case[])

/** Half a minute each by direct integration; the same values are proven in map.spec.ts. */
const slow = new Set(['map-1-mode', 'map-2-continuum'])

/** Largest deviation in units of what the case allows, walking both trees of values together. */
const worstOf = (
  expected: unknown,
  found: unknown,
  tolerance: Tolerance,
  peak: number,
  path: string[] = [],
): number => {
  if (typeof expected === 'number') {
    // Only the modulus of the maximum scales the other values; its place is flat by nature.
    if (path.includes('rephasingMaximum') && !path.includes('modulusPs2')) return 0
    if (typeof found !== 'number') return Infinity
    const { relative = 0, absolute = 0, ofPeak = 0, ofMaximum = 0 } = tolerance
    const allowed = absolute + relative * Math.abs(expected) + ofPeak * peak + ofMaximum
    return Math.abs(found - expected) / Math.max(allowed, 1e-300)
  }
  if (typeof expected !== 'object' || expected === null)
    return expected === found || path.at(-1) === 'unit' ? 0 : Infinity
  return Object.entries(expected).reduce((worst, [key, value]) => {
    const other = (found as Record<string, unknown> | undefined)?.[key]
    return Math.max(worst, worstOf(value, other, tolerance, peak, [...path, key]))
  }, 0)
}

describe('requests of the command line', () => {
  it('covers every kind of reference value', () => {
    expect(new Set(cases.map(({ quantity }) => quantity)).size).toBeGreaterThanOrEqual(engineQuantities.length - 1)
  })

  it.each(cases.filter(({ id }) => !slow.has(id)).map((entry) => [entry.id, entry] as const))(
    'answers %s within its tolerance',
    (_, { values, tolerance, ...request }) => {
      const { requests, problems } = parseRequests([request])
      expect(problems).toEqual([])
      const [answer] = evaluateRequests(requests)
      if (!answer || 'error' in answer) throw new Error(JSON.stringify(answer))
      expect(answer).toMatchObject({ id: request.id, quantity: request.quantity })
      const peak = Number(values.peak ?? values.absorptionPeakOnGrid ?? 0)
      expect(worstOf(values, answer.values, tolerance, peak)).toBeLessThanOrEqual(1)
    },
    60_000,
  )

  it('answers in the order asked and gives an unknown quantity its own error', () => {
    const { requests, problems } = parseRequests({
      cases: [
        { id: 'b', quantity: 'lorentzianFwhm', parameters: { coherenceTimesPs: [1] } },
        { id: 'c', quantity: 'somethingElse', parameters: {} },
        { quantity: 'zeroPhononWeight', parameters: { temperatureK: 4, bath: [drude] } },
      ],
    })
    expect(problems).toEqual([])
    const answers = evaluateRequests(requests)
    expect(answers[0]).toMatchObject({ id: 'b', quantity: 'lorentzianFwhm' })
    expect(answers[1]).toMatchObject({
      id: 'c',
      error: {
        code: 'engine/unknown-quantity',
        path: '$[1].quantity',
        message: expect.stringContaining('found somethingElse'),
      },
    })
    expect(answers[2]).toMatchObject({
      error: {
        code: 'engine/refused',
        path: '$[2].parameters.bath',
        message: expect.stringContaining('thermal width'),
      },
    })
  })

  const drude = { kind: 'overdamped', reorganizationEnergyMeV: 1, relaxationEnergyMeV: 1 }

  it.each([
    [null, '$: expected an array of requests, or an object with "cases"; found null'],
    [{ requests: [] }, '$: expected an array'],
    [
      [{ quantity: 'absorption', parameters: { temperatureK: -4 }, samples: { points: [1] } }],
      '$[0].parameters.temperatureK: expected temperature',
    ],
    [
      [{ quantity: 'absorption', parameters: { temperatureK: 4 }, samples: { points: ['1'] } }],
      '$[0].samples.points[0]: ',
    ],
    [[{ quantity: 'absorption', parameters: { temperatureK: 4 } }], '$[0].samples: '],
    [[{ quantity: 'moments', parameters: { temperatureK: 4, temprature: 4 } }], '$[0].parameters: '],
    [
      [{ quantity: 'moments', parameters: { temperatureK: 4, bath: [{ ...drude, relaxationEnergyMeV: 0 }] } }],
      '$[0].parameters.bath[0].relaxationEnergyMeV: ',
    ],
    [[3], '$[0]: '],
  ])('names every wrong place of %j', (document, start) => {
    const { problems } = parseRequests(document)
    expect(problems.length).toBeGreaterThan(0)
    expect(`${problems[0]!.path}: ${problems[0]!.message}`.startsWith(start)).toBe(true)
  })
})
