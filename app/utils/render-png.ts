import { CustomChart, LineChart } from 'echarts/charts'
import { GridComponent } from 'echarts/components'
import { init, use } from 'echarts/core'
import { CanvasRenderer } from 'echarts/renderers'
import type { ChartOption } from '#shared/figure/line-figure'

use([LineChart, CustomChart, GridComponent, CanvasRenderer])

/** A PNG of an option, `pixelRatio` image pixels to a CSS pixel. */
export const renderPng = async (
  option: ChartOption,
  size: { width: number; height: number; pixelRatio: number; background: string },
): Promise<Blob> => {
  await loadFigureFont()
  const host = document.createElement('div')
  const chart = init(host, null, { renderer: 'canvas', width: size.width, height: size.height })
  try {
    chart.setOption({ ...option, animation: false })
    const canvas = chart.renderToCanvas({ pixelRatio: size.pixelRatio, backgroundColor: size.background })
    return await new Promise((resolve, reject) =>
      canvas.toBlob((blob) => (blob ? resolve(blob) : reject(new Error('The browser made no image.'))), 'image/png'),
    )
  } finally {
    chart.dispose()
  }
}
