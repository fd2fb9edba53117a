import { deflateSync } from 'node:zlib'
import { describe, expect, it } from 'vitest'
import { lineFigureOption } from '../../../../shared/figure/line-figure'
import { mapFigureOption } from '../../../../shared/figure/map-figure'
import { toPngDataUri } from '../../../../shared/figure/png'
import { renderSvg } from '../../../../shared/figure/render-svg'
import { sampleLines, sampleMap } from './sample-figures'

const size = { width: 640, height: 420 }
const lines = (label: string) => {
  const figure = sampleLines()
  return renderSvg(
    lineFigureOption(
      {
        ...figure,
        xLabel: `${label} (meV)`,
        yLabel: label,
        residualLabel: label,
        series: figure.series.map((one) => ({ ...one, label })),
      },
      { ...size, mode: 'light' },
    ),
    { ...size, background: '#ffffff', title: label },
  )
}
const map = (label: string) =>
  renderSvg(
    mapFigureOption(
      sampleMap({
        xLabel: label,
        yLabel: label,
        valueLabel: label,
        edges: true,
        place: { energy1: 2000, energy3: 2001 },
      }),
      { ...size, mode: 'light' },
      (image) => toPngDataUri(image, (bytes) => new Uint8Array(deflateSync(bytes))),
    ),
    { ...size, title: label },
  )

const allowed: Record<string, RegExp> = {
  svg: /^(width|height|xmlns|xmlns:xlink|version|baseProfile|viewBox)$/,
  title: /^$/,
  g: /^(clip-path|transform)$/,
  rect: /^(x|y|width|height|fill|fill-opacity)$/,
  text: /^(x|y|transform|fill|stroke|stroke-width|stroke-linejoin|paint-order|dominant-baseline|text-anchor|style|xml:space|stroke-miterlimit|font-[a-z]+)$/,
  path: /^(d|transform|fill|stroke|stroke-width|stroke-opacity|stroke-dasharray|stroke-linecap|stroke-linejoin|fill-opacity|opacity|pointer-events|clip-path)$/,
  polyline:
    /^(points|transform|fill|stroke|stroke-width|stroke-dasharray|stroke-linecap|stroke-linejoin|pointer-events)$/,
  image: /^(preserveAspectRatio|href|xlink:href|x|y|width|height|transform|clip-path|opacity)$/,
  clipPath: /^id$/,
  defs: /^$/,
}

interface Element {
  name: string
  attributes: Record<string, string>
}

/** A strict little reader: throws on anything that is not well-formed, so that validity is checked as well. */
const elementsOf = (svg: string): Element[] => {
  const found: Element[] = []
  const open: string[] = []
  const token = /<(\/?)([A-Za-z]+)((?:\s+[A-Za-z:-]+="[^"<]*")*)\s*(\/?)>|([^<]+)/gy
  let at = 0
  while (at < svg.length) {
    token.lastIndex = at
    const match = token.exec(svg)
    if (!match) throw new Error(`not well-formed at ${at}: ${svg.slice(at, at + 80)}`)
    at = token.lastIndex
    const [, close, name = '', attributes = '', selfClosed, text] = match
    if (text !== undefined) {
      if (/&(?!(amp|lt|gt|quot|apos|#\d+|#x[\da-f]+|#39);)/i.test(text)) throw new Error(`bare ampersand in ${text}`)
      continue
    }
    if (close) {
      if (open.pop() !== name) throw new Error(`unexpected end of ${name}`)
      continue
    }
    const pairs = [...attributes.matchAll(/([A-Za-z:-]+)="([^"]*)"/g)].map((pair) => [pair[1], pair[2]])
    found.push({ name, attributes: Object.fromEntries(pairs) as Record<string, string> })
    if (!selfClosed) open.push(name)
  }
  if (open.length > 0) throw new Error(`never closed: ${open.join(', ')}`)
  return found
}

/** Labels that try to leave their place: markup, entities, control characters, addresses, chart templates. */
const hostile = [
  '<script>alert(1)</script>',
  '"><svg onload=alert(1)>',
  "'><image href=x onerror=alert(1)>",
  ']]><script>alert(1)</script>',
  '</text><foreignObject><body onload=alert(1)>',
  '&lt;script&gt;alert(1)&lt;/script&gt;',
  '&#x3c;script&#x3e;',
  'javascript:alert(1)',
  '<a xlink:href="javascript:alert(1)">x</a>',
  '<!--',
  '-->',
  '<![CDATA[',
  '<?xml version="1.0"?>',
  '<!DOCTYPE svg [<!ENTITY x "y">]>',
  '&x;',
  '{a|b}',
  '{value}',
  '{b}',
  '%7Bscript%7D',
  '\\u003cscript\\u003e',
  'a\u0000b',
  'a\u000bb',
  'a\u001bb',
  'line\nbreak',
  'tab\there',
  '\ud800 alone',
  'pair \ud83d\ude00',
  '\ufffe',
  '\uffff',
  '\u202egnp.exe',
  'url(http://192.0.2.1/x)',
  '@import "x"',
  'expression(alert(1))',
  '</style><script>',
  '</title><script>',
  '=1+1',
  '  ',
  '',
  'ħω₀ (cm⁻¹)',
  'a'.repeat(300),
]

describe('exported SVG', () => {
  it.each([
    ['curves', lines],
    ['map', map],
  ])('of %s with hostile labels is well-formed and holds allowed elements and attributes only', (_, draw) => {
    expect(hostile.length).toBe(40)
    for (const label of hostile) {
      const svg = draw(label)
      for (const { name, attributes } of elementsOf(svg)) {
        const pattern = allowed[name]
        expect(pattern, `<${name}> for ${JSON.stringify(label)}`).toBeDefined()
        for (const [attribute, value] of Object.entries(attributes)) {
          expect(attribute, `${name}@${attribute} for ${JSON.stringify(label)}`).toMatch(pattern as RegExp)
          if (/href$/.test(attribute)) expect(value).toMatch(/^data:image\/png;base64,[A-Za-z0-9+/=]+$/)
          if (attribute === 'style') expect(value).toMatch(/^[a-z0-9:;., '&#-]*$/i)
        }
      }
      // eslint-disable-next-line no-control-regex -- looking for what XML cannot carry
      expect(svg).not.toMatch(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/)
    }
  })

  it('keeps text as text in the figure font', () => {
    const svg = lines('photon energy')
    expect(svg).toMatch(/<text[^>]*>photon energy \(meV\)<\/text>/)
    expect(svg).toContain("'Source Sans 3'")
    expect(svg).toMatch(/^<svg[^>]*><title>photon energy<\/title>/)
  })

  it('is the same each time', () => {
    expect(map('absorptive (1)')).toBe(map('absorptive (1)'))
  })

  it('carries a map as one image', () => {
    expect(map('x').match(/<image /g)).toHaveLength(2)
  })
})
