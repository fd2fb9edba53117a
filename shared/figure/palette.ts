import { clampChroma, converter, formatHex, useMode, modeOklch, modeOklab, modeRgb } from 'culori/fn'

/**
 * The colours of figures, in the page and in exported files. One meaning per colour: glacier is a simulation and drawn
 * as a line, ember is a measurement and drawn as points, slate is a residual or something secondary. The values are the
 * tokens of app/assets/css/main.css (a test compares them), converted to sRGB because canvas and SVG viewers need it.
 */
useMode(modeRgb)
useMode(modeOklab)
useMode(modeOklch)

export type ColorMode = 'light' | 'dark'
export type SeriesRole = 'simulation' | 'measurement' | 'residual' | 'secondary'
/** Lightness 0 to 1, chroma, hue in degrees. */
export type Oklch = readonly [lightness: number, chroma: number, hue: number]

export const tokens = {
  light: {
    paper: [0.985, 0.006, 95],
    ink: [0.24, 0.03, 255],
    muted: [0.46, 0.025, 250],
    slate: [0.55, 0.02, 250],
    glacier: [0.55, 0.11, 230],
    ember: [0.57, 0.165, 40],
  },
  dark: {
    paper: [0.195, 0.016, 255],
    ink: [0.94, 0.008, 95],
    muted: [0.74, 0.015, 250],
    slate: [0.64, 0.02, 250],
    glacier: [0.66, 0.11, 230],
    ember: [0.66, 0.165, 40],
  },
} as const satisfies Record<ColorMode, Record<string, Oklch>>

export type Token = keyof (typeof tokens)['light']

/** sRGB hex of an OKLCH colour; chroma is reduced where the screen cannot show it, hue and lightness stay. */
export const toHex = ([l, c, h]: Oklch): string => formatHex(clampChroma({ mode: 'oklch', l, c, h }, 'oklch'))

export const tokenHex = (token: Token, mode: ColorMode): string => toHex(tokens[mode][token])

const roleTokens = { simulation: 'glacier', measurement: 'ember', residual: 'slate', secondary: 'slate' } as const

/**
 * Lightness along a temperature series: the coldest curve stands out most from the paper, the hottest least. Both ends
 * keep a contrast of 3:1 with the paper (WCAG 2.2, 1.4.11).
 */
const shadeEnds = { light: [0.36, 0.645], dark: [0.86, 0.52] } as const

/** Colour of one series; `shade` runs 0..1 along a series of temperatures and moves lightness only. */
export const seriesOklch = (role: SeriesRole, mode: ColorMode, shade?: number): Oklch => {
  const [l, c, h] = tokens[mode][roleTokens[role]]
  if (shade === undefined) return [l, c, h]
  const [cold, hot] = shadeEnds[mode]
  return [cold + (hot - cold) * Math.min(1, Math.max(0, shade)), c, h]
}

export const seriesHex = (role: SeriesRole, mode: ColorMode, shade?: number): string =>
  toHex(seriesOklch(role, mode, shade))

/** Lightness that still reads as text of normal size on the paper (4.5:1). */
const textLightness = { light: 0.53, dark: 0.7 } as const

/** Colour of a label that stands at a curve: the curve's own, moved away from the paper as far as text needs. */
export const labelHex = (role: SeriesRole, mode: ColorMode, shade?: number): string => {
  const [l, c, h] = seriesOklch(role, mode, shade)
  const bound = textLightness[mode]
  return toHex([mode === 'light' ? Math.min(l, bound) : Math.max(l, bound), c, h])
}

/** OKLab coordinates of a token, for the colour maps that start and end on tokens. */
export const toOklab = (color: Oklch): [number, number, number] => {
  const lab = converter('oklab')({ mode: 'oklch', l: color[0], c: color[1], h: color[2] })
  return [lab.l, lab.a, lab.b]
}
