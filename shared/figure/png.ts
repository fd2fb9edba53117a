import type { IndexedImage } from './map-image'

/**
 * PNG of an indexed image (W3C PNG specification, third edition: colour type 3, bit depth 8). One byte a pixel and at
 * most 256 colours is what a colour map is, so files stay small. Compression is handed in, because the page and Node
 * have different ones; without it the data is stored in plain blocks (RFC 1951, 3.2.4).
 */
export type Deflate = (bytes: Uint8Array) => Uint8Array

const crcTable = Uint32Array.from({ length: 256 }, (_, n) => {
  let c = n
  for (let k = 0; k < 8; k++) c = c & 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1
  return c >>> 0
})

const crc32 = (bytes: Uint8Array): number => {
  let c = 0xffffffff
  for (const byte of bytes) c = (crcTable[(c ^ byte) & 0xff] as number) ^ (c >>> 8)
  return (c ^ 0xffffffff) >>> 0
}

const adler32 = (bytes: Uint8Array): number => {
  let a = 1
  let b = 0
  for (const byte of bytes) {
    a = (a + byte) % 65521
    b = (b + a) % 65521
  }
  return ((b << 16) | a) >>> 0
}

const concat = (parts: readonly Uint8Array[]): Uint8Array => {
  const whole = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0))
  let offset = 0
  for (const part of parts) {
    whole.set(part, offset)
    offset += part.length
  }
  return whole
}

const uint32 = (value: number): Uint8Array =>
  Uint8Array.of((value >>> 24) & 0xff, (value >>> 16) & 0xff, (value >>> 8) & 0xff, value & 0xff)

/** A zlib stream (RFC 1950) whose blocks are stored as they are. */
export const storeOnly: Deflate = (bytes) => {
  const parts: Uint8Array[] = [Uint8Array.of(0x78, 0x01)]
  const block = 65535
  for (let start = 0; start === 0 || start < bytes.length; start += block) {
    const piece = bytes.subarray(start, start + block)
    const isLast = start + block >= bytes.length
    const length = piece.length
    parts.push(
      Uint8Array.of(isLast ? 1 : 0, length & 0xff, length >>> 8, ~length & 0xff, (~length >>> 8) & 0xff),
      piece,
    )
  }
  parts.push(uint32(adler32(bytes)))
  return concat(parts)
}

const chunk = (type: string, data: Uint8Array): Uint8Array => {
  const body = concat([Uint8Array.from(type, (character) => character.charCodeAt(0)), data])
  return concat([uint32(data.length), body, uint32(crc32(body))])
}

export const encodePng = (image: IndexedImage, deflate: Deflate = storeOnly): Uint8Array => {
  const { width, height, indices, table } = image
  const rows = new Uint8Array(height * (width + 1))
  for (let y = 0; y < height; y++) rows.set(indices.subarray(y * width, (y + 1) * width), y * (width + 1) + 1)
  return concat([
    Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a),
    chunk('IHDR', concat([uint32(width), uint32(height), Uint8Array.of(8, 3, 0, 0, 0)])),
    chunk('PLTE', table),
    chunk('IDAT', deflate(rows)),
    chunk('IEND', new Uint8Array(0)),
  ])
}

const toBase64 = (bytes: Uint8Array): string => {
  let binary = ''
  // Pieces, because a call takes only so many arguments.
  for (let i = 0; i < bytes.length; i += 0x8000) binary += String.fromCharCode(...bytes.subarray(i, i + 0x8000))
  return btoa(binary)
}

export const toPngDataUri = (image: IndexedImage, deflate?: Deflate): string =>
  `data:image/png;base64,${toBase64(encodePng(image, deflate))}`
