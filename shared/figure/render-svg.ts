import { CustomChart, LineChart } from 'echarts/charts'
import { GridComponent } from 'echarts/components'
import { init, use } from 'echarts/core'
import { SVGRenderer } from 'echarts/renderers'
import type { ChartOption } from './line-figure'
import { plainLabel } from './style'

use([LineChart, CustomChart, GridComponent, SVGRenderer])

const escapeXml = (text: string): string =>
  text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;')

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
    const body = chart
      .renderToSVGString()
      // Marks for re-attaching a live chart; a file needs none.
      .replace(/ ecmeta_[a-z_]+="[^"]*"/g, '')
      // A painted map fills its frame exactly, whatever the proportions of its samples.
      .replace(/<image /g, '<image preserveAspectRatio="none" ')
    const head = title ? `<title>${escapeXml(plainLabel(title))}</title>` : ''
    return body.replace(/^(<svg[^>]*>)/, `$1${head}`)
  } finally {
    chart.dispose()
  }
}
