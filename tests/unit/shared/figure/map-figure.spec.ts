import { inflateSync, deflateSync } from 'node:zlib'
import { describe, expect, it } from 'vitest'
import { contourLevels, traceContours } from '../../../../shared/figure/contour-paths'
import {
  contourable,
  halve,
  interestingRange,
  paintable,
  reachOf,
  resample,
  visiblePart,
} from '../../../../shared/figure/map-data'
import { edgePaths } from '../../../../shared/figure/map-edges'
import { mapFigureOption } from '../../../../shared/figure/map-figure'
import { paintMap, toRgba, type IndexedImage } from '../../../../shared/figure/map-image'
import { fromMapPixel, mapLayout, squareSize, toBarPixel, toMapPixel } from '../../../../shared/figure/map-layout'
import { mapFigureCsv, mapValueAt, summarizeMap } from '../../../../shared/figure/map-text'
import { encodePng, storeOnly } from '../../../../shared/figure/png'
import { rounded, sampleMap } from './sample-figures'

const frame = { width: 600, height: 480, mode: 'light' as const }
const size = (image: IndexedImage) => `image ${image.width} x ${image.height}`

describe('option of a map', () => {
  it('is what it was, after rounding', () => {
    const option = mapFigureOption(sampleMap({ place: { energy1: 2001, energy3: 1999 }, edges: true }), frame, size)
    const series = (option.series as { id: string; renderItem: () => { children: object[] } }[]).map((one) => ({
      id: one.id,
      children: one.renderItem().children.map((child) => ({ ...child, shape: undefined })),
    }))
    expect(rounded({ ...option, series })).toMatchSnapshot()
  })

  it('is square, with the diagonal from corner to corner of equal ranges', () => {
    const map = sampleMap()
    const { box } = mapLayout(map, { ...frame, ...squareSize(map, frame.width) })
    expect(Math.abs(box.width - box.height)).toBeLessThanOrEqual(1)
    const layout = mapLayout(map, frame)
    expect(toMapPixel(layout, { energy1: 1990, energy3: 1990 })).toEqual({
      x: layout.box.left,
      y: layout.box.top + layout.box.height,
    })
    const back = fromMapPixel(
      layout,
      ...(Object.values(toMapPixel(layout, { energy1: 1997.5, energy3: 2003 })) as [number, number]),
    )
    expect(back.energy1).toBeCloseTo(1997.5, 9)
    expect(back.energy3).toBeCloseTo(2003, 9)
  })

  it('has a symmetric range when signed and starts at zero when not', () => {
    expect(mapLayout(sampleMap(), frame).values.range).toEqual({
      low: -reachOf(sampleMap().values),
      high: reachOf(sampleMap().values),
    })
    expect(mapLayout(sampleMap({ signed: false, reach: 2 }), frame).values.range).toEqual({ low: 0, high: 2 })
  })

  it('fits into a height without wasting width', () => {
    const fitted = squareSize(sampleMap(), 900, 400)
    expect(fitted.height).toBe(400)
    const { box, bar } = mapLayout(sampleMap(), { ...fitted, mode: 'light' })
    expect(box.width).toBeCloseTo(box.height, 6)
    expect(fitted.width - bar.left).toBeLessThan(100)
  })

  it('compresses by an inverse hyperbolic sine on request: odd, rising, a hundredth of the reach well in sight', () => {
    const { values, bar } = mapLayout(sampleMap({ scale: 'asinh', reach: 2 }), frame)
    expect(values.toShare(2)).toBeCloseTo(1, 12)
    expect(values.toShare(-0.3)).toBeCloseTo(-values.toShare(0.3), 12)
    expect(values.toShare(0.02)).toBeGreaterThan(0.15)
    expect(values.fromShare(values.toShare(0.37))).toBeCloseTo(0.37, 12)
    expect(values.ticks.labels).toEqual(['−2', '−1', '−0.1', '−0.01', '0', '0.01', '0.1', '1', '2'])
    expect(toBarPixel({ ...mapLayout(sampleMap({ scale: 'asinh', reach: 2 }), frame) }, -2)).toBe(bar.top + bar.height)
  })

  it('draws an empty, a constant and a single-sample map without failing', () => {
    const none = new Float64Array(0)
    for (const change of [
      { energies1: none, energies3: none, values: none },
      { values: new Float64Array(41 * 41) },
      { energies1: Float64Array.of(1), energies3: Float64Array.of(1), values: Float64Array.of(1) },
    ]) {
      const map = sampleMap({ ...change, edges: true, place: { energy1: 1, energy3: 1 } })
      expect(JSON.stringify(mapFigureOption(map, frame, size))).not.toMatch(/NaN|Infinity/)
      expect(summarizeMap(map)).not.toContain('undefined')
    }
  })
})

describe('the part in sight', () => {
  it('holds one sample beyond either end of its ranges', () => {
    const map = sampleMap({ range1: { low: 1995, high: 2005 }, range3: { low: 1990, high: 1992 } })
    const part = visiblePart(map)
    expect([part.start1, part.count1, part.start3, part.count3]).toEqual([1994.5, 23, 1990, 6])
    expect(part.values[3 * part.count3 + 2]).toBe(map.values[(9 + 3) * 41 + 2])
  })

  it('is interpolated to a side that paints smoothly and is traced on at most 256 samples', () => {
    const fine = paintable(visiblePart(sampleMap()), 200)
    expect([fine.count1, fine.count3]).toEqual([320, 320])
    expect(fine.step1 * 319).toBeCloseTo(0.5 * 40, 9)
    const big = {
      values: new Float64Array(600 * 300),
      count1: 600,
      count3: 300,
      start1: 0,
      start3: 0,
      step1: 1,
      step3: 1,
    }
    expect(contourable(big)).toMatchObject({ count1: 256, count3: 256 })
    const plane = {
      values: Float64Array.of(0, 1, 2, 3),
      count1: 2,
      count3: 2,
      start1: 0,
      start3: 0,
      step1: 1,
      step3: 1,
    }
    expect([...resample(plane, 3, 3).values]).toEqual([0, 0.5, 1, 1, 1.5, 2, 2, 2.5, 3])
  })

  it('is averaged two by two without moving', () => {
    const plane = Float64Array.from({ length: 24 }, (_, k) => 10 * Math.floor(k / 4) + (k % 4))
    const halved = halve({ values: plane, count1: 6, count3: 4, start1: 100, start3: 200, step1: 2, step3: 1 })
    expect(halved).toMatchObject({ count1: 3, count3: 2, start1: 101, start3: 200.5, step1: 4, step3: 2 })
    expect([...halved.values]).toEqual([5.5, 7.5, 25.5, 27.5, 45.5, 47.5])
  })

  it('is found around what is not flat, alike on both axes', () => {
    const { energies1, energies3, values } = sampleMap()
    const range = interestingRange(energies1, energies3, values, 0.5)
    expect(range.low).toBeGreaterThan(1990)
    expect(range.high).toBeLessThan(2010)
    expect(
      interestingRange(
        energies1,
        energies3,
        values.map(() => 0),
      ),
    ).toEqual({ low: 1990, high: 2010 })
  })
})

describe('contours', () => {
  it('stand at equal steps of the reach, zero left out', () => {
    expect(contourLevels(1, 4, true)).toEqual([-0.75, -0.5, -0.25, 0.25, 0.5, 0.75])
    expect(contourLevels(2, 4, false)).toEqual([0.5, 1, 1.5])
    expect(contourLevels(0, 4, true)).toEqual([])
  })

  it('of a cone are circles at the right radius, above and below zero', () => {
    const n = 101
    const cone = Float64Array.from(
      { length: n * n },
      (_, k) => 1 - Math.hypot(Math.floor(k / n) - 50, (k % n) - 50) / 50,
    )
    const part = { values: cone, count1: n, count3: n, start1: 0, start3: 0, step1: 1, step3: 1 }
    for (const sign of [1, -1]) {
      const signed = { ...part, values: cone.map((value) => sign * value) }
      const [contour] = traceContours(signed, [sign * 0.5])
      const points = contour?.lines.flat() ?? []
      expect(points.length).toBeGreaterThan(100)
      for (const [a, b] of points) expect(Math.hypot(a - 50, b - 50)).toBeCloseTo(25, 1)
    }
  })

  it('do not run along the border of the map', () => {
    const ramp = Float64Array.from({ length: 100 }, (_, k) => k % 10)
    const part = { values: ramp, count1: 10, count3: 10, start1: 0, start3: 0, step1: 1, step3: 1 }
    const [contour] = traceContours(part, [4.5])
    expect(contour?.lines).toHaveLength(1)
    for (const [, along3] of contour?.lines[0] ?? []) expect(along3).toBeCloseTo(4.5, 9)
  })
})

describe('painted images', () => {
  const image = paintMap(visiblePart(sampleMap()), { low: -1, high: 1 }, true, 'light')

  it('have energy 1 to the right and energy 3 upward', () => {
    const map = sampleMap({ values: Float64Array.from({ length: 41 * 41 }, (_, k) => (k === 40 ? 1 : 0)) })
    const corner = paintMap(visiblePart(map), { low: -1, high: 1 }, true, 'light')
    expect(corner.indices[0]).toBe(254)
    expect(corner.indices.filter((index) => index !== 127)).toHaveLength(1)
  })

  it.each([
    ['stored', storeOnly],
    ['deflated', (bytes: Uint8Array) => new Uint8Array(deflateSync(bytes))],
  ])('make a PNG that reads back pixel by pixel, %s', (_, deflate) => {
    const bytes = Buffer.from(encodePng(image, deflate))
    expect(bytes.subarray(0, 8).toString('latin1')).toBe('\x89PNG\r\n\x1a\n')
    const chunks = new Map<string, Buffer>()
    for (let at = 8; at < bytes.length;) {
      const length = bytes.readUInt32BE(at)
      chunks.set(bytes.toString('latin1', at + 4, at + 8), bytes.subarray(at + 8, at + 8 + length))
      at += length + 12
    }
    expect(bytes.readUInt32BE(16)).toBe(41)
    const rows = inflateSync(chunks.get('IDAT') ?? Buffer.alloc(0))
    const pixels = Array.from({ length: 41 }, (_, y) => [...rows.subarray(y * 42 + 1, (y + 1) * 42)]).flat()
    expect(pixels).toEqual([...image.indices])
    expect([...(chunks.get('PLTE') ?? [])]).toEqual([...image.table])
  })

  it('give a canvas opaque pixels of the table', () => {
    const rgba = toRgba(image)
    const entry = 3 * (image.indices[500] as number)
    expect([...rgba.subarray(2000, 2004)]).toEqual([...image.table.subarray(entry, entry + 3), 255])
  })
})

describe('reading a map', () => {
  it('takes the sample nearest to a place', () => {
    const map = sampleMap()
    const at = mapValueAt(map, { energy1: 2000.2, energy3: 1999.8 })
    expect(at.place).toEqual({ energy1: 2000, energy3: 2000 })
    expect(at.value).toBe(map.values[20 * 41 + 20])
  })

  it('draws the slices through a place on the edges, with the values of the map', () => {
    const map = sampleMap({ edges: true })
    const layout = mapLayout(map, frame)
    const paths = edgePaths(map, layout, { energy1: 2000, energy3: 2000 })
    expect(paths.top.match(/[ML]/g)).toHaveLength(41)
    if (!layout.edges) throw new Error('expected panels on the edges')
    const { top, shares } = layout.edges
    const heights = [...paths.top.matchAll(/[ML][\d.]+ ([\d.]+)/g)].map((match) => Number(match[1]))
    const share = (layout.values.toShare(Math.max(...map.values)) - shares.low) / (shares.high - shares.low)
    expect(Math.min(...heights)).toBeCloseTo(top.top + (1 - share) * top.height, 0)
  })

  it('says where its extremes lie', () => {
    expect(summarizeMap(sampleMap())).toMatch(
      /^absorptive over excitation energy and detection energy\. Maximum 0\.9\d+ at excitation 2000, detection 2000 meV; minimum −0\.\d+ at excitation 200\d\.?\d*, detection 199\d\.?\d* meV\.$/,
    )
  })

  it('writes the part in sight, one line a sample', () => {
    const lines = mapFigureCsv(sampleMap({ range1: { low: 2000, high: 2000.5 }, range3: { low: 1999, high: 2000 } }))
      .trim()
      .split('\r\n')
    expect(lines).toHaveLength(1 + 2 * 3)
    expect(lines[0]).toBe('excitation energy (meV),detection energy (meV),absorptive (1)')
    expect(lines[1]?.startsWith('2000,1999,')).toBe(true)
  })
})
