import { describe, expect, it } from 'vitest'
import { compareCurves, overlaySeries, type LoadedCurve, type LoadedMeasurement } from '../../../app/utils/overlay-fit'

const energies = Float64Array.from({ length: 201 }, (_, i) => 1980 + 0.2 * i)
const line = (width: number) => Float64Array.from(energies, (e) => 1 / (1 + ((e - 2000) / width) ** 2))
const loaded = (t: number, change: Partial<LoadedCurve['curve']> = {}): LoadedCurve => ({
  curve: { runId: 'run', temperatureIndex: t, kind: 'absorption', against: 0, scale: null, offset: null, ...change },
  id: `run:${t}:absorption`,
  label: `set version 1, ${t} K, absorption`,
  shortLabel: `${t} K`,
  temperatureK: t,
  energiesMeV: energies,
  values: line(3 + t),
})
const measurement = (uncertainties: Float64Array | null = null): LoadedMeasurement => {
  const points = Float64Array.from({ length: 60 }, (_, i) => 1985 + 0.5 * i)
  return {
    id: 'm',
    name: 'invented flake',
    energiesMeV: points,
    values: points.map((e) => 2.5 / (1 + ((e - 2000) / 3) ** 2) + 0.4),
    uncertainties,
  }
}

describe('an overlay', () => {
  it('brings the curve that made the points back onto them', () => {
    const [row] = compareCurves([loaded(0)], [measurement()], null)
    expect(row?.fit?.ok).toBe(true)
    if (!row?.fit?.ok) return
    expect(row.fit.scale.value).toBeCloseTo(2.5, 3)
    expect(row.fit.offset.value).toBeCloseTo(0.4, 3)
    expect(row.fit.points).toBe(60)
  })

  it('holds what is held by hand and compares over the chosen energies only', () => {
    const held = loaded(0, { scale: 2, offset: 0.5 })
    const [row] = compareCurves([held], [measurement()], { low: 1990, high: 2000 })
    if (!row?.fit?.ok) throw new Error('expected a comparison')
    expect([row.fit.scale, row.fit.offset]).toEqual([
      { value: 2, standardError: null },
      { value: 0.5, standardError: null },
    ])
    expect(row.fit.points).toBe(21)
    expect(row.fit.leftOut).toBe(39)
  })

  it('draws points, scaled lines and one residual', () => {
    const measured = measurement(new Float64Array(60).fill(0.1))
    const rows = compareCurves([loaded(0), loaded(5)], [measured], null)
    const series = overlaySeries(rows, [measured], 'run:5:absorption')
    expect(series.map((one) => [one.role, one.label, one.shade, one.isStrong])).toEqual([
      ['measurement', 'invented flake', undefined, undefined],
      ['simulation', '0 K', 0, false],
      ['simulation', '5 K', 1, true],
      ['residual', 'set version 1, 5 K, absorption', undefined, undefined],
    ])
    const [first] = rows
    if (!first?.fit?.ok) throw new Error('expected a comparison')
    const { scale, offset } = first.fit
    expect(series[1]?.y[100]).toBeCloseTo(scale.value * 1 + offset.value, 12)
  })

  it('shows simulations as they are while no measurement is chosen, and says why a comparison is impossible', () => {
    const [alone] = compareCurves([loaded(0)], [], null)
    expect(alone?.fit).toBeNull()
    expect(overlaySeries([alone as never], [], null)[0]?.y).toEqual(line(3))
    const far = { ...measurement(), energiesMeV: Float64Array.from({ length: 60 }, (_, i) => 3000 + i) }
    const [apart] = compareCurves([loaded(0)], [far], null)
    expect(apart?.fit).toMatchObject({ ok: false, code: 'no-overlap' })
  })
})
