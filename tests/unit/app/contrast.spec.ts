import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

const css = readFileSync(new URL('../../../app/assets/css/main.css', import.meta.url), 'utf8')

const tokensOf = (selector: string): Record<string, [number, number, number]> => {
  const block = css.slice(css.indexOf(`${selector} {`)).split('}')[0] ?? ''
  return Object.fromEntries(
    [...block.matchAll(/--([a-z-]+): ([\d.]+) ([\d.]+) ([\d.]+);/g)].map(([, name, l, c, h]) => [
      name,
      [Number(l), Number(c), Number(h)],
    ]),
  )
}

/** Relative luminance of an OKLCH colour, clipped to sRGB (matrices of Ottosson 2020; luminance of WCAG 2.2). */
const luminance = ([l, c, h]: [number, number, number]): number => {
  const a = c * Math.cos((h * Math.PI) / 180)
  const b = c * Math.sin((h * Math.PI) / 180)
  const [lms1, lms2, lms3] = [
    (l + 0.3963377774 * a + 0.2158037573 * b) ** 3,
    (l - 0.1055613458 * a - 0.0638541728 * b) ** 3,
    (l - 0.0894841775 * a - 1.291485548 * b) ** 3,
  ]
  const linear = [
    4.0767416621 * lms1 - 3.3077115913 * lms2 + 0.2309699292 * lms3,
    -1.2684380046 * lms1 + 2.6097574011 * lms2 - 0.3413193965 * lms3,
    -0.0041960863 * lms1 - 0.7034186147 * lms2 + 1.707614701 * lms3,
  ].map((channel) => Math.min(1, Math.max(0, channel))) as [number, number, number]
  return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]
}

const contrast = (one: [number, number, number], other: [number, number, number]): number => {
  const [dark, light] = [luminance(one), luminance(other)].sort((x, y) => x - y) as [number, number]
  return (light + 0.05) / (dark + 0.05)
}

// WCAG 2.2, success criteria 1.4.3 (text, 4.5) and 1.4.11 (parts of controls and graphics, 3).
const texts = ['ink', 'muted', 'glacier-text', 'ember-text', 'fault', 'moss']
const graphics = ['slate', 'glacier', 'ember', 'outline']

describe.each([':root', '.dark'])('colour tokens of %s', (selector) => {
  const tokens = tokensOf(selector)
  const token = (name: string) => {
    const value = tokens[name]
    if (!value) throw new Error(`no token ${name} in ${selector}`)
    return value
  }

  it.each(texts.flatMap((text) => [['paper', text] as const, ['wash', text] as const]))(
    'on %s, %s is readable text',
    (ground, text) => expect(contrast(token(ground), token(text))).toBeGreaterThanOrEqual(4.5),
  )

  it.each(graphics)('on paper, %s can be told from the ground', (graphic) =>
    expect(contrast(token('paper'), token(graphic))).toBeGreaterThanOrEqual(3),
  )

  it('paper is readable on ink (primary buttons)', () =>
    expect(contrast(token('ink'), token('paper'))).toBeGreaterThanOrEqual(4.5))
})
