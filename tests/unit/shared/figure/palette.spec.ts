import { readFileSync } from 'node:fs'
import { modeLrgb, modeRgb, useMode, wcagContrast } from 'culori/fn'
import { describe, expect, it } from 'vitest'
import {
  labelHex,
  seriesHex,
  seriesOklch,
  tokenHex,
  tokens,
  type ColorMode,
  type SeriesRole,
} from '../../../../shared/figure/palette'

useMode(modeRgb)
useMode(modeLrgb)
const css = readFileSync(new URL('../../../../app/assets/css/main.css', import.meta.url), 'utf8')

/** Tokens of one theme as the style sheet states them. */
const cssTokens = (mode: ColorMode): Record<string, number[]> => {
  const block = css.slice(css.indexOf(mode === 'light' ? ':root {' : '.dark {'))
  const body = block.slice(0, block.indexOf('}'))
  return Object.fromEntries(
    [...body.matchAll(/--([a-z-]+):\s*([\d.]+) ([\d.]+) ([\d.]+);/g)].map((match) => [
      match[1],
      match.slice(2, 5).map(Number),
    ]),
  )
}

const roles: SeriesRole[] = ['simulation', 'measurement', 'residual', 'secondary']
const shades = [undefined, 0, 0.25, 0.5, 0.75, 1]

describe.each(['light', 'dark'] as const)('palette, %s', (mode) => {
  it('is the one of the style sheet', () => {
    const stated = cssTokens(mode)
    for (const [name, value] of Object.entries(tokens[mode])) expect(stated[name], name).toEqual([...value])
  })

  it('keeps lines at 3:1 and labels at 4.5:1 against the paper', () => {
    const paper = tokenHex('paper', mode)
    for (const role of roles) {
      for (const shade of shades) {
        expect(wcagContrast(seriesHex(role, mode, shade), paper), `${role} ${shade}`).toBeGreaterThanOrEqual(3)
        expect(wcagContrast(labelHex(role, mode, shade), paper), `${role} ${shade}`).toBeGreaterThanOrEqual(4.5)
      }
    }
  })

  it('moves along a temperature series by lightness only, from most to least contrast', () => {
    const series = shades.slice(1).map((shade) => seriesOklch('simulation', mode, shade))
    const paper = tokens[mode].paper[0]
    for (const [index, [l, c, h]] of series.entries()) {
      expect([c, h]).toEqual([...tokens[mode].glacier.slice(1)])
      const before = series[index - 1]
      if (before) expect(Math.abs(l - paper)).toBeLessThan(Math.abs(before[0] - paper))
    }
  })
})
