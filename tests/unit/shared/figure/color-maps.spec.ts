import {
  converter,
  differenceCiede2000,
  filterDeficiencyDeuter,
  filterDeficiencyProt,
  filterDeficiencyTrit,
  modeLab65,
  modeLch65,
  modeOklab,
  modeRgb,
  useMode,
  type Rgb,
} from 'culori/fn'
import { describe, expect, it } from 'vitest'
import {
  colorMapAt,
  colorMapEntries,
  colorMapIndex,
  colorMapTable,
  type ColorMapName,
} from '../../../../shared/figure/color-maps'
import { tokens, toOklab, type ColorMode } from '../../../../shared/figure/palette'

useMode(modeRgb)
useMode(modeOklab)
useMode(modeLab65)
useMode(modeLch65)

const modes: ColorMode[] = ['light', 'dark']
const names: ColorMapName[] = ['diverging', 'sequential']
const steps = Array.from({ length: 65 }, (_, k) => k / 64)
const distance = (a: readonly number[], b: readonly number[]) =>
  Math.hypot(...a.map((value, k) => value - (b[k] as number)))
const toRgb = converter('rgb')
const toLab = converter('oklab')
const rgbAt = (name: ColorMapName, mode: ColorMode, t: number): Rgb => {
  const [l, a, b] = colorMapAt(name, mode, t)
  return toRgb({ mode: 'oklab', l, a, b })
}

describe.each(modes)('colour maps, %s', (mode) => {
  it.each(names)('%s: equal steps of the value are equal steps of lightness and of colour difference', (name) => {
    const colors = steps.map((t) => colorMapAt(name, mode, t))
    const lightness = colors.slice(1).map((color, k) => color[0] - (colors[k]?.[0] ?? 0))
    const differences = colors.slice(1).map((color, k) => distance(color, colors[k] ?? color))
    const half = name === 'diverging' ? steps.length >> 1 : steps.length - 1
    for (const [k, step] of lightness.entries()) {
      const first = k < half ? (lightness[0] as number) : (lightness[half] as number)
      expect(step).toBeCloseTo(first, 12)
    }
    const [smallest, largest] = [Math.min(...differences), Math.max(...differences)]
    // Both halves of the diverging map end at equal chroma; the tint of the paper makes them differ by under 2 %.
    expect(largest / smallest).toBeLessThan(1.02)
  })

  it.each(names)('%s: stays inside sRGB, so that rounding is the only loss', (name) => {
    for (const t of steps) {
      const { r, g, b } = rgbAt(name, mode, t)
      for (const channel of [r, g, b]) {
        expect(channel).toBeGreaterThanOrEqual(-0.001)
        expect(channel).toBeLessThanOrEqual(1.001)
      }
    }
  })

  it('diverging: the ends have equal lightness and zero is the paper', () => {
    const [low, middle, high] = [0, 0.5, 1].map((t) => colorMapAt('diverging', mode, t))
    expect(low?.[0]).toBeCloseTo(high?.[0] ?? NaN, 12)
    expect(middle).toEqual(toOklab(tokens[mode].paper))
    const table = colorMapTable('diverging', mode)
    const center = (colorMapEntries - 1) / 2
    const paper = toRgb({ mode: 'oklch', l: tokens[mode].paper[0], c: tokens[mode].paper[1], h: tokens[mode].paper[2] })
    expect([...table.subarray(3 * center, 3 * center + 3)]).toEqual(
      [paper.r, paper.g, paper.b].map((channel) => Math.round(255 * channel)),
    )
  })

  it('sequential: runs from paper to ink with lightness in one direction', () => {
    expect(colorMapAt('sequential', mode, 0)).toEqual(toOklab(tokens[mode].paper))
    const end = colorMapAt('sequential', mode, 1)
    toOklab(tokens[mode].ink).forEach((value, k) => expect(end[k]).toBeCloseTo(value, 12))
  })

  // Machado, Oliveira and Fernandes, IEEE Trans. Vis. Comput. Graph. 15, 1291 (2009), severity 1, as culori has it.
  const deficiencies = {
    protanopia: filterDeficiencyProt(1),
    deuteranopia: filterDeficiencyDeuter(1),
    tritanopia: filterDeficiencyTrit(1),
  }
  it.each(Object.entries(deficiencies))('both maps keep their order and their sides for %s', (_, simulate) => {
    const seen = (name: ColorMapName, t: number) => simulate(rgbAt(name, mode, t))
    for (const name of names) {
      const sign = colorMapAt(name, mode, 1)[0] > colorMapAt(name, mode, 0.5)[0] ? 1 : -1
      const upper = steps.filter((t) => name === 'sequential' || t >= 0.5)
      const lower = steps.filter((t) => name === 'diverging' && t <= 0.5).reverse()
      for (const side of [upper, lower]) {
        const lightness = side.map((t) => sign * toLab(seen(name, t)).l)
        for (let k = 1; k < lightness.length; k++) {
          expect(lightness[k] as number).toBeGreaterThan(lightness[k - 1] as number)
        }
      }
    }
    const difference = differenceCiede2000()
    // A just noticeable difference is about 1; opposite signs at a fifth of the range must be plainly apart.
    for (const share of [0.2, 0.4, 0.6, 0.8, 1]) {
      const apart = difference(seen('diverging', 0.5 - share / 2), seen('diverging', 0.5 + share / 2))
      expect(apart).toBeGreaterThan(share >= 0.4 ? 8 : 4)
    }
  })
})

describe('entries of the table', () => {
  it('put zero of a symmetric range on the middle and bound what lies outside', () => {
    expect(colorMapIndex(0, -2, 2, true)).toBe((colorMapEntries - 1) / 2)
    expect(colorMapIndex(5, -2, 2, true)).toBe(colorMapEntries - 1)
    expect(colorMapIndex(-5, -2, 2, true)).toBe(0)
    expect(colorMapIndex(NaN, -2, 2, true)).toBe((colorMapEntries - 1) / 2)
    expect(colorMapIndex(NaN, 0, 2, false)).toBe(0)
    expect(colorMapIndex(1, 1, 1, false)).toBe(0)
  })
})
