import type { ArrayDescription } from '#shared/schemas/run'

/** One stored array in the memory of the page. Complex ones are interleaved: real, imaginary, real, ... */
export interface RunArray {
  key: string
  dataType: ArrayDescription['dataType']
  shape: number[]
  unit: string
  data: Float64Array | Float32Array
}

const isDataType = (text: string): text is ArrayDescription['dataType'] =>
  ['float64', 'float32', 'complex128', 'complex64'].includes(text)

/** Makes an array from an answer's bytes and headers, and refuses one whose length does not fit its shape. */
export const toRunArray = (key: string, headers: Headers, bytes: ArrayBuffer): RunArray => {
  const dataType = headers.get('x-array-type') ?? ''
  if (!isDataType(dataType)) {
    throw new Error(`Array ${key}: expected a type of number in X-Array-Type; found "${dataType}".`)
  }
  const shape = (headers.get('x-array-shape') ?? '').split(',').map(Number)
  const parts = dataType.startsWith('complex') ? 2 : 1
  // Every processor that a browser runs on is little-endian, as the stored bytes are.
  const isDouble = dataType === 'float64' || dataType === 'complex128'
  const width = isDouble ? 8 : 4
  const expected = shape.reduce((product, length) => product * length, parts * width)
  if (bytes.byteLength !== expected) {
    throw new Error(
      `Array ${key}: expected ${expected} bytes for shape ${shape.join(' × ')}; found ${bytes.byteLength}.`,
    )
  }
  const unit = decodeURIComponent(headers.get('x-array-unit') ?? '')
  return { key, dataType, shape, unit, data: isDouble ? new Float64Array(bytes) : new Float32Array(bytes) }
}

export const asDouble = (array: RunArray): Float64Array =>
  array.data instanceof Float64Array ? array.data : Float64Array.from(array.data)

export const signalParts = ['real', 'imaginary', 'magnitude'] as const
export type SignalPart = (typeof signalParts)[number]

/** One part of interleaved complex numbers. */
export const complexPart = (data: Float64Array | Float32Array, part: SignalPart): Float64Array => {
  const n = data.length >> 1
  const values = new Float64Array(n)
  for (let i = 0; i < n; i++) {
    const re = data[2 * i] as number
    const im = data[2 * i + 1] as number
    values[i] = part === 'real' ? re : part === 'imaginary' ? im : Math.hypot(re, im)
  }
  return values
}

/** One part of the sum of two interleaved complex arrays: rephasing + non-rephasing. */
export const sumPart = (
  one: Float64Array | Float32Array,
  other: Float64Array | Float32Array,
  part: SignalPart,
): Float64Array => {
  const n = Math.min(one.length, other.length) >> 1
  const values = new Float64Array(n)
  for (let i = 0; i < n; i++) {
    const re = (one[2 * i] as number) + (other[2 * i] as number)
    const im = (one[2 * i + 1] as number) + (other[2 * i + 1] as number)
    values[i] = part === 'real' ? re : part === 'imaginary' ? im : Math.hypot(re, im)
  }
  return values
}
