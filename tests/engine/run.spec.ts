import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { computePreview } from '../../shared/engine/preview'
import { computeRun, estimateRun, type RunAnswer, type RunArray } from '../../shared/engine/run'
import { assertFinite, type RunInterruption } from '../../shared/engine/run-types'
import { ParameterSetSchema, type ParameterSet } from '../../shared/schemas/parameter-set'
import { RunSummarySchema } from '../../shared/schemas/run'
import { hashOf } from '../../shared/utils/canonical'
import { arbitraryMode, arbitraryPowerLaw, arbitraryTemperature } from './arbitrary'
import { largest, parameterSet, powerLaw } from './support'

type Done = Extract<RunAnswer, { ok: true }>
const done = (answer: RunAnswer): Done => {
  if (!answer.ok) throw new Error(answer.message)
  return answer
}
const arrayOf = ({ arrays }: Done, key: string): RunArray => {
  const found = arrays.find((array) => array.key === key)
  if (!found) throw new Error(`no array ${key}`)
  return found
}

const set = parameterSet({
  bath: [powerLaw({ exponent: 1, couplingStrength: 0.02 }), powerLaw()],
  modes: [{ label: 'optical', energyMeV: 9, huangRhys: 0.2 }],
  zeroPhononFwhmMeV: 1,
  acousticBroadeningMeVPerK: 0.002,
  ensembleFwhmMeV: 2,
  populationLifetimePs: 50,
  laser: { centerMeV: 2001, fwhmMeV: 20 },
  temperaturesK: [5, 60],
  waitingTimesPs: [0, 0.8],
})

describe('a run', () => {
  const fractions: number[] = []
  const answer = done(computeRun(set, { onProgress: (fraction) => fractions.push(fraction) }))
  const { summary, arrays } = answer

  it('describes itself by the shared schema', () => {
    expect(RunSummarySchema.parse(summary)).toEqual(summary)
    expect(summary.temperaturesK).toEqual([5, 60])
    expect(summary.linearGrid).toHaveLength(2)
    expect(summary.broadeningError).toBeLessThan(1e-9)
    expect(summary.notes.filter((note) => note.startsWith('Self-check'))).toHaveLength(2)
    expect(summary.notes.some((note) => note.includes('I(E1) I(E3)'))).toBe(true)
  })

  it('has every array under its key, once, with its shape', () => {
    const keys = arrays.map(({ key }) => key)
    expect(new Set(keys).size).toBe(keys.length)
    const perMap = [
      ...['rephasing', 'nonRephasing', 'absorptive'].map((name) => `map/T/W/${name}`),
      ...['shifts', 'rephasing', 'nonRephasing', 'absorptive'].map((name) => `crossDiagonal/T/W/${name}`),
      ...['energies', 'rephasing', 'nonRephasing', 'absorptive'].map((name) => `diagonal/T/W/${name}`),
    ]
    const perTemperature = ['linear/T/energies', 'absorption/T', 'emission/T', 'map/T/energies1', 'map/T/energies3']
    const expected = [
      'spectralDensity/energies',
      'spectralDensity/values',
      ...[0, 1].flatMap((t) => [
        ...perTemperature.map((key) => key.replace('T', String(t))),
        ...[0, 1].flatMap((w) => perMap.map((key) => key.replace('T', String(t)).replace('W', String(w)))),
      ]),
    ]
    expect([...keys].sort()).toEqual(expected.sort())
    for (const { dataType, shape, data } of arrays) {
      const points = shape.reduce((product, length) => product * length, 1)
      expect(data.length).toBe(points * (dataType.startsWith('complex') ? 2 : 1))
      expect(data instanceof Float32Array).toBe(dataType === 'float32' || dataType === 'complex64')
    }
    expect(summary.arrays.map(({ key }) => key)).toEqual(keys)
  })

  it('keeps the hash of lines over their own bytes, of maps over the double-precision bytes', () => {
    for (const { key, sha256, dataType } of summary.arrays) {
      expect(sha256).toMatch(/^[0-9a-f]{64}$/)
      const { data } = arrayOf(answer, key)
      const own = hashOf(new Uint8Array(data.buffer, data.byteOffset, data.byteLength))
      expect(own === sha256).toBe(dataType === 'float64' || dataType === 'complex128')
    }
  })

  it('reports an honest, rising progress that ends at 1', () => {
    expect(fractions.length).toBe(6)
    expect([...fractions].sort((a, b) => a - b)).toEqual(fractions)
    expect(fractions.at(-1)).toBe(1)
    expect(fractions[0]).toBeLessThan(0.2)
  })

  it('has an absorptive map that is the real part of the sum, with slices on it', () => {
    const [r, s, a] = ['rephasing', 'nonRephasing', 'absorptive'].map((name) => arrayOf(answer, `map/0/1/${name}`).data)
    const scale = largest(a!.map(Math.abs))
    expect(largest(Array.from(a!, (value, i) => Math.abs(value - r![2 * i]! - s![2 * i]!)))).toBeLessThan(2e-7 * scale)
    // Both pass through (E0, E0): the middle of the map and of either slice.
    const side = arrayOf(answer, 'map/0/energies1').data
    const middle = side.length / 2
    expect(side[middle]).toBe(2000)
    for (const name of ['rephasing', 'nonRephasing']) {
      const map = arrayOf(answer, `map/0/1/${name}`).data
      const centre = 2 * (middle * side.length + middle)
      for (const [kind, axis] of [
        ['crossDiagonal', 'shifts'],
        ['diagonal', 'energies'],
      ] as const) {
        const positions = arrayOf(answer, `${kind}/0/1/${axis}`).data
        const at = positions.length / 2
        expect(positions[at]).toBe(kind === 'diagonal' ? 2000 : 0)
        const slice = arrayOf(answer, `${kind}/0/1/${name}`).data
        expect(Math.abs(slice[2 * at]! - map[centre]!)).toBeLessThan(2e-7 * scale)
        expect(Math.abs(slice[2 * at + 1]! - map[centre + 1]!)).toBeLessThan(2e-7 * scale)
      }
    }
  })

  it('weights maps and slices with the laser, and lines not', () => {
    const { laser: _, ...bare } = set
    const unweighted = done(computeRun({ ...bare, temperaturesK: [5], waitingTimesPs: [0.8] }))
    const intensity = (energy: number) => Math.exp(-4 * Math.LN2 * ((energy - 2001) / 20) ** 2)
    const energies = arrayOf(answer, 'map/0/energies1').data
    const [with_, without] = [
      arrayOf(answer, 'map/0/1/absorptive').data,
      arrayOf(unweighted, 'map/0/0/absorptive').data,
    ]
    const side = energies.length
    const scale = largest(without.map(Math.abs))
    for (const [i, k] of [
      [side / 2, side / 2],
      [side / 2 - 7, side / 2 + 12],
      [3, side / 2],
    ] as const) {
      const expected = without[i * side + k]! * intensity(energies[i]!) * intensity(energies[k]!)
      expect(Math.abs(with_[i * side + k]! - expected)).toBeLessThan(2e-7 * scale)
    }
    const shifts = arrayOf(answer, 'crossDiagonal/0/1/shifts').data
    const at = shifts.length / 2 + 30
    const weight = intensity(2000 - shifts[at]! / 2) * intensity(2000 + shifts[at]! / 2)
    const [slice, bareSlice] = [answer, unweighted].map(
      (run, k) => arrayOf(run, `crossDiagonal/0/${1 - k}/rephasing`).data,
    )
    expect(Math.abs(slice![2 * at]! - weight * bareSlice![2 * at]!)).toBeLessThan(1e-12 * scale)
    expect(arrayOf(answer, 'absorption/0').data).toEqual(arrayOf(unweighted, 'absorption/0').data)
  })

  it('gives the numbers of the preview', () => {
    set.temperaturesK.forEach((temperature, t) =>
      set.waitingTimesPs.forEach((wait, w) => {
        const preview = computePreview(set, temperature, wait)
        expect(preview.issues).toEqual([])
        expect(arrayOf(answer, 'spectralDensity/values').data).toEqual(preview.spectralDensity.densityMeV)
        expect(arrayOf(answer, `linear/${t}/energies`).data).toEqual(preview.absorption!.energiesMeV)
        expect(arrayOf(answer, `absorption/${t}`).data).toEqual(preview.absorption!.perMeV)
        expect(arrayOf(answer, `emission/${t}`).data).toEqual(preview.emission!.perMeV)
        const { shiftsMeV, re, im, magnitude } = preview.crossDiagonal!
        expect(arrayOf(answer, `crossDiagonal/${t}/${w}/shifts`).data).toEqual(shiftsMeV)
        const { data } = arrayOf(answer, `crossDiagonal/${t}/${w}/rephasing`)
        const scale = largest(magnitude)
        expect(largest(re.map((value, i) => Math.hypot(value - data[2 * i]!, im[i]! - data[2 * i + 1]!)))).toBeLessThan(
          1e-12 * scale,
        )
      }),
    )
  })

  it('gives the same bytes twice', () => {
    const again = done(computeRun(set))
    expect(again.summary.arrays).toEqual(summary.arrays)
    expect(again.summary.quantities).toEqual(summary.quantities)
  })

  it('lists measured quantities per temperature and map', () => {
    const curves = summary.quantities.map(
      ({ temperatureIndex, waitingTimeIndex, curve }) => `${curve} ${temperatureIndex} ${waitingTimeIndex}`,
    )
    for (const t of [0, 1]) {
      for (const curve of ['model', 'absorption', 'emission', 'absorptionAndEmission'])
        expect(curves).toContain(`${curve} ${t} null`)
      for (const w of [0, 1]) expect(curves).toContain(`map ${t} ${w}`)
    }
    for (const { values } of summary.quantities) {
      for (const { value, reason } of values) expect(value === null ? reason : 'present').toBeTruthy()
    }
  })

  it('stops between pieces of work, and before the first', () => {
    expect(computeRun(set, { shouldStop: () => true })).toMatchObject({ ok: false, code: 'engine/stopped' })
    let asked = 0
    const late = computeRun(set, { shouldStop: () => ++asked > 12 })
    expect(late).toMatchObject({ ok: false, code: 'engine/stopped' })
    expect(asked).toBe(13)
  })

  it('names the stage of a number that is not finite', () => {
    try {
      assertFinite('absorption/3', [1, 2], [0, NaN])
      expect.unreachable()
    } catch (error) {
      expect((error as RunInterruption).failure).toEqual({
        ok: false,
        code: 'engine/not-finite',
        message: 'absorption/3: expected finite numbers; found NaN at index 1 of 2',
        issues: [],
      })
    }
  })
})

describe('an estimate', () => {
  it('is what the run has', () => {
    const estimate = estimateRun(set)
    const { summary, arrays } = done(computeRun(set))
    expect(estimate.refusal).toBeUndefined()
    expect(estimate.linearGrid.map(({ reason }) => reason)).toEqual(summary.linearGrid.map(({ reason }) => reason))
    const bytes = arrays
      .filter(({ key }) => !key.startsWith('spectralDensity'))
      .reduce((sum, { data }) => sum + data.byteLength, 0)
    expect(estimate.bytes).toBe(bytes)
  })

  it('refuses what the run refuses, in the same words', () => {
    for (const changes of [{ zeroPhononFwhmMeV: 0 }, { zeroPhononFwhmMeV: 1e-4, bath: [powerLaw()] }]) {
      const refused = parameterSet(changes)
      const { refusal } = estimateRun(refused)
      expect(computeRun(refused)).toEqual({ ok: false, ...refusal })
      expect(refusal!.issues[0]!.path).toEqual(['zeroPhononFwhmMeV'])
    }
  })
})

describe('a preview', () => {
  it('shows what exists and says why the rest does not', () => {
    const ensemble = computePreview(parameterSet({ ensembleFwhmMeV: 3 }), 4, 0)
    expect(ensemble.absorption).not.toBeNull()
    expect(ensemble.crossDiagonal).toBeNull()
    expect(ensemble.issues.map(({ path }) => path)).toEqual([['zeroPhononFwhmMeV']])
    const nothing = computePreview(parameterSet(), 4, 0)
    expect(nothing.absorption).toBeNull()
    expect(nothing.spectralDensity.densityMeV.every((value) => value === 0)).toBe(true)
    expect(nothing.issues.length).toBeGreaterThan(0)
  })

  it('has no NaN for any valid set that it accepts', () => {
    const arbitrarySet = fc
      .record({
        bath: fc.array(arbitraryPowerLaw, { maxLength: 2 }),
        modes: fc.array(arbitraryMode, { maxLength: 2 }),
        zeroPhononFwhmMeV: fc.constantFrom(0, 0.05, 1, 30),
        ensembleFwhmMeV: fc.constantFrom(0, 0.3, 20),
        temperature: arbitraryTemperature,
        wait: fc.constantFrom(0, 0.01, 1, 1000),
      })
      .map(({ temperature, wait, ...rest }) =>
        ParameterSetSchema.parse({
          zeroPhononEnergyMeV: 2000,
          ...rest,
          temperaturesK: [temperature],
          waitingTimesPs: [wait],
        }),
      )
    const small = (grid: { samples: number; paddedSamples: number } | null) =>
      grid !== null && grid.paddedSamples <= 2 ** 15
    fc.assert(
      fc.property(arbitrarySet, (candidate: ParameterSet) => {
        const estimate = estimateRun(candidate)
        // Large grids are no different and would only take long.
        if (estimate.refusal || !small(estimate.linearGrid[0]!) || estimate.mapGrid[0]!.samples > 1024) return
        const preview = computePreview(candidate, candidate.temperaturesK[0]!, candidate.waitingTimesPs[0]!)
        const { absorption, emission, crossDiagonal } = preview
        for (const values of [absorption!.perMeV, emission!.perMeV, crossDiagonal!.re, crossDiagonal!.im]) {
          expect(values.every(Number.isFinite)).toBe(true)
        }
        const peak = largest(absorption!.perMeV)
        expect(peak).toBeGreaterThan(0)
        // No spectrum is negative beyond its own accuracy.
        expect(absorption!.perMeV.reduce((a, b) => Math.min(a, b), 0)).toBeGreaterThan(-1e-5 * peak)
      }),
      { numRuns: 60 },
    )
  })
})
