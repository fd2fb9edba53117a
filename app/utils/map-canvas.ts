import { toRgba, type IndexedImage } from '#shared/figure/map-image'

/** A canvas that holds an image of colour-table entries, for the chart to draw. */
export const toCanvas = (image: IndexedImage): HTMLCanvasElement => {
  const canvas = document.createElement('canvas')
  canvas.width = image.width
  canvas.height = image.height
  canvas.getContext('2d')?.putImageData(new ImageData(toRgba(image), image.width, image.height), 0, 0)
  return canvas
}

/** The same as a data address, which an SVG file can carry. The browser compresses it. */
export const toCanvasUri = (image: IndexedImage): string => toCanvas(image).toDataURL('image/png')
