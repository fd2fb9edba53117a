import { describe, expect, it } from 'vitest'
import { formatCurves, parseCurves, parseIds, type OverlayCurve } from '../../../app/utils/overlay-state'

const run = '1212f1f2-407c-4c82-b34d-5eaef81bfa4d'
const other = '9d9ef136-33cf-468d-bcdb-68ea1d7ae8f5'
const curve = (change: Partial<OverlayCurve> = {}): OverlayCurve => ({
  runId: run,
  temperatureIndex: 0,
  kind: 'absorption',
  against: 0,
  scale: null,
  offset: null,
  ...change,
})

describe('the address of an overlay', () => {
  it('holds all that the figure depends on', () => {
    const curves = [
      curve(),
      curve({ temperatureIndex: 12, kind: 'emission', against: 2, scale: -1.25e-7, offset: 0 }),
      curve({ runId: other, scale: 3 }),
    ]
    expect(parseCurves(formatCurves(curves))).toEqual(curves)
    expect(formatCurves([curve()])).toBe(`${run}:0:absorption`)
    expect(formatCurves(curves)).toMatch(/^[0-9a-z:.,-]+$/)
  })

  it.each([
    ['', []],
    ['nonsense', []],
    [`${run}:0:reflection`, []],
    [`${run}:-1:absorption`, []],
    [`${run}:1e9:absorption`, []],
    [`../../session:0:absorption`, []],
    [`${run}:0:absorption:kNaN`, []],
    [`${run}:0:absorption:k`, []],
    [`${run}:0:absorption:m0.5`, []],
    [`${run}:0:absorption:x1`, []],
    [`${run}:0:absorption,${run}:0:absorption:k2`, [curve({ scale: 2 })]],
    [`${run}:0:absorption,junk`, [curve()]],
  ])('reads %j without trusting it', (text, expected) => {
    expect(parseCurves(text)).toEqual(expected)
  })

  it('asks for at most 32 curves and measurements, each once', () => {
    const many = Array.from({ length: 99 }, (_, t) => curve({ temperatureIndex: t }))
    expect(parseCurves(formatCurves(many))).toHaveLength(32)
    expect(parseIds(`${run},${other},${run},x,../${run}`)).toEqual([run, other])
  })
})
