import { describe, expect, it } from 'vitest'
import { nearestIndex, rulerLabels, rulerPositions } from '../../../app/utils/ruler'

describe('places along a ruler', () => {
  it('are true to scale where the values allow it', () => {
    expect(rulerPositions([4, 50, 100, 200, 300])).toEqual([0, 46 / 296, 96 / 296, 196 / 296, 1])
    expect(rulerPositions([10])).toEqual([0.5])
    expect(rulerPositions([])).toEqual([])
  })

  it('are compressed where values crowd, in order and from end to end', () => {
    const places = rulerPositions([0, 0.1, 0.5, 2, 10, 100, 1000])
    expect(places[0]).toBe(0)
    expect(places.at(-1)).toBeCloseTo(1, 12)
    places.slice(1).forEach((place, k) => expect(place - (places[k] as number)).toBeGreaterThan(0.05))
  })

  it('are found again from a pointer', () => {
    const places = rulerPositions([0, 1, 2, 3, 4])
    expect(nearestIndex(places, 0.6)).toBe(2)
    expect(nearestIndex(places, -3)).toBe(0)
    expect(nearestIndex(places, 3)).toBe(4)
  })

  it('carry labels that do not touch, the chosen one always', () => {
    const values = Array.from({ length: 40 }, (_, k) => k)
    const places = rulerPositions(values)
    const texts = values.map(String)
    const kept = rulerLabels(places, texts, 300, 17)
    expect(kept).toContain(17)
    expect(kept.length).toBeLessThan(20)
    kept.slice(1).forEach((k, at) => {
      const gap = ((places[k] as number) - (places[kept[at] as number] as number)) * 300
      expect(gap).toBeGreaterThanOrEqual(10)
    })
  })
})
