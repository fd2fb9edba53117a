import { colorMapEntries, colorMapIndex, colorMapTable } from './color-maps'
import type { MapPart } from './map-data'
import type { ColorMode } from './palette'
import type { Range } from './ticks'

/** An image as entries of a colour table: row 0 on top, energy 1 to the right, energy 3 upward. */
export interface IndexedImage {
  width: number
  height: number
  indices: Uint8Array
  /** sRGB triplets. */
  table: Uint8Array
}

export const paintMap = (part: MapPart, valueRange: Range, signed: boolean, mode: ColorMode): IndexedImage => {
  const { count1: width, count3: height } = part
  const indices = new Uint8Array(width * height)
  for (let x = 0; x < width; x++) {
    for (let y = 0; y < height; y++) {
      const value = part.values[x * height + (height - 1 - y)] as number
      indices[y * width + x] = colorMapIndex(value, valueRange.low, valueRange.high, signed)
    }
  }
  return { width, height, indices, table: colorMapTable(signed ? 'diverging' : 'sequential', mode) }
}

/** The colour bar: one column, highest value on top. */
export const paintBar = (signed: boolean, mode: ColorMode): IndexedImage => {
  const indices = Uint8Array.from({ length: colorMapEntries }, (_, y) => colorMapEntries - 1 - y)
  const table = colorMapTable(signed ? 'diverging' : 'sequential', mode)
  return { width: 1, height: colorMapEntries, indices, table }
}

/** Red, green, blue, alpha bytes, as a canvas takes them. */
export const toRgba = ({ indices, table }: IndexedImage): Uint8ClampedArray<ArrayBuffer> => {
  const rgba = new Uint8ClampedArray(4 * indices.length)
  for (let i = 0; i < indices.length; i++) {
    const entry = 3 * (indices[i] as number)
    rgba[4 * i] = table[entry] as number
    rgba[4 * i + 1] = table[entry + 1] as number
    rgba[4 * i + 2] = table[entry + 2] as number
    rgba[4 * i + 3] = 255
  }
  return rgba
}
