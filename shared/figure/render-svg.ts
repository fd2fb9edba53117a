import { CustomChart, LineChart } from 'echarts/charts'
import { GridComponent } from 'echarts/components'
import { init, use } from 'echarts/core'
import { SVGRenderer } from 'echarts/renderers'
import type { ChartOption } from './line-figure'
import { plainLabel } from './style'

use([LineChart, CustomChart, GridComponent, SVGRenderer])

const escapeXml = (text: string): string =>
  text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;')

/**
 * Takes out what serves a live chart only: marks for re-attaching it, hover classes and their style sheet. Labels cannot
 * be hit, because in them quotes and angle brackets are escaped.
 */
const tidy = (svg: string): string =>
  svg
    .replace(/ ecmeta_[a-z_]+="[^"]*"/g, '')
    .replace(/ class="zr[^"]*"/g, '')
    .replace(/ pointer-events="[a-z]+"/g, '')
    .replace(/<style[^>]*>[\s\S]*?<\/style>\s*/g, '')
    // The number of charts drawn before is in the names of clip paths: the same figure shall give the same file.
    .replace(/(id="|url\(#)zr\d+-/g, '$1')
    // A painted map fills its frame exactly, whatever the proportions of its samples.
    .replace(/<image /g, '<image preserveAspectRatio="none" ')

export interface SvgOptions {
  width: number
  height: number
  /** Paper of the figure; absent for a transparent one. */
  background?: string
  /** One line that names the figure inside the file. */
  title?: string
}

/**
 * A self-contained SVG document of an option: text stays text, no script, no style sheet, no outside reference. Runs in
 * the page and in Node alike; the chart is disposed, else a Node process would never end.
 */
export const renderSvg = (option: ChartOption, { width, height, background, title }: SvgOptions): string => {
  const chart = init(null, null, { renderer: 'svg', ssr: true, width, height })
  try {
    chart.setOption({ ...option, animation: false, ...(background ? { backgroundColor: background } : {}) })
    const body = tidy(chart.renderToSVGString())
    const head = title ? `<title>${escapeXml(plainLabel(title))}</title>` : ''
    return body.replace(/^(<svg[^>]*>)/, `$1${head}`)
  } finally {
    chart.dispose()
  }
}
