import type { ChartOption } from '#shared/figure/line-figure'

export interface ExportSource {
  /** File name without its ending, also the title inside the file. */
  name: string
  width: number
  height: number
  /** The figure in the light theme at that size; `forFile` asks for images as data addresses instead of canvases. */
  option: (forFile: boolean) => ChartOption
  csv: () => string
}

/** Saves a figure. The renderers are loaded on first use only. Files are always in the light theme, on white. */
export const useFigureExport = (source: () => ExportSource) => {
  const busy = ref(false)
  const failure = ref('')
  const ratio = ref(3)
  const background = '#ffffff'

  const save = async (format: 'svg' | 'png' | 'csv'): Promise<void> => {
    const { name, width, height, option, csv } = source()
    busy.value = true
    failure.value = ''
    try {
      if (format === 'csv') saveFile(`${name}.csv`, csv(), 'text/csv;charset=utf-8')
      else if (format === 'svg') {
        const { renderSvg } = await import('#shared/figure/render-svg')
        const svg = renderSvg(option(true), { width, height, background, title: name })
        saveFile(`${name}.svg`, svg, 'image/svg+xml;charset=utf-8')
      } else {
        const { renderPng } = await import('~/utils/render-png')
        saveFile(`${name}.png`, await renderPng(option(false), { width, height, pixelRatio: ratio.value, background }))
      }
    } catch (error) {
      failure.value = `The ${format.toUpperCase()} file could not be made. ${messageOf(error)}`
    } finally {
      busy.value = false
    }
  }

  return { busy: readonly(busy), failure: readonly(failure), ratio, save }
}
