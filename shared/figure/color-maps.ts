import { clampRgb, converter, useMode, modeOklab, modeRgb } from 'culori/fn'
import { tokens, toOklab, type ColorMode, type Oklch } from './palette'

/**
 * Two colour maps of our own, straight lines in OKLab and therefore perceptually even: equal steps of the value are
 * equal steps of lightness and of colour difference. `diverging` runs plum - paper - moss with ends of equal lightness
 * and chroma, for signed maps with a symmetric range; `sequential` runs paper - ink, for magnitudes. Plum and moss
 * differ along both chromatic axes, so that they stay apart for protanopic, deuteranopic and tritanopic readers.
 */
useMode(modeRgb)
useMode(modeOklab)

export type ColorMapName = 'diverging' | 'sequential'
export type Oklab = readonly [l: number, a: number, b: number]

const ends = {
  light: { plum: [0.42, 0.13, 320], moss: [0.42, 0.13, 145] },
  dark: { plum: [0.8, 0.13, 320], moss: [0.8, 0.13, 145] },
} as const satisfies Record<ColorMode, Record<'plum' | 'moss', Oklch>>

/** Odd, so that the middle entry of the diverging map is the paper itself and zero has no colour. */
export const colorMapEntries = 255

const mix = (from: Oklab, to: Oklab, t: number): Oklab => [
  from[0] + (to[0] - from[0]) * t,
  from[1] + (to[1] - from[1]) * t,
  from[2] + (to[2] - from[2]) * t,
]

/** OKLab colour at t: 0..1 for both maps, with 0.5 the paper of the diverging one. */
export const colorMapAt = (name: ColorMapName, mode: ColorMode, t: number): Oklab => {
  const paper = toOklab(tokens[mode].paper)
  if (name === 'sequential') return mix(paper, toOklab(tokens[mode].ink), t)
  const end = toOklab(t < 0.5 ? ends[mode].plum : ends[mode].moss)
  return mix(paper, end, Math.abs(2 * t - 1))
}

const cache = new Map<string, Uint8Array>()

/** The map as a table of `colorMapEntries` sRGB triplets. */
export const colorMapTable = (name: ColorMapName, mode: ColorMode): Uint8Array => {
  const key = `${name}/${mode}`
  const known = cache.get(key)
  if (known) return known
  const toRgb = converter('rgb')
  const table = new Uint8Array(colorMapEntries * 3)
  for (let i = 0; i < colorMapEntries; i++) {
    const [l, a, b] = colorMapAt(name, mode, i / (colorMapEntries - 1))
    const rgb = clampRgb(toRgb({ mode: 'oklab', l, a, b }))
    table[3 * i] = Math.round(rgb.r * 255)
    table[3 * i + 1] = Math.round(rgb.g * 255)
    table[3 * i + 2] = Math.round(rgb.b * 255)
  }
  cache.set(key, table)
  return table
}

/** Entry of the table for a value; values outside the range take the end colours, missing values the paper. */
export const colorMapIndex = (value: number, low: number, high: number, signed: boolean): number => {
  if (!Number.isFinite(value) || !(high > low)) return signed ? (colorMapEntries - 1) / 2 : 0
  const t = Math.min(1, Math.max(0, (value - low) / (high - low)))
  return Math.round(t * (colorMapEntries - 1))
}
