import type { StoredArray } from '../database/repositories/results.repository'
import { RunSummarySchema, type ArrayDescription, type RunSummary } from '../../shared/schemas/run'

/** An array as it comes from a thread. */
export interface ComputedArray {
  key: string
  dataType: ArrayDescription['dataType']
  shape: readonly number[]
  unit: string
  data: Float64Array | Float32Array
}

const bytesOfItem = { float32: 4, float64: 8, complex64: 8, complex128: 16 } as const

const toBytes = ({ key, dataType, shape, data }: ComputedArray): Buffer => {
  const expected = shape.reduce((product, length) => product * length, bytesOfItem[dataType])
  if (data.byteLength !== expected) {
    throw new Error(`array ${key}: expected ${expected} bytes for ${dataType}[${shape}]; found ${data.byteLength}`)
  }
  return Buffer.from(data.buffer, data.byteOffset, data.byteLength)
}

/**
 * What a thread answered, checked before it is stored: every number of the summary finite, and the arrays exactly those
 * that the summary names.
 */
export const toStoredResult = (answer: {
  summary: unknown
  arrays: readonly ComputedArray[]
}): { summary: RunSummary; arrays: StoredArray[] } => {
  const summary = RunSummarySchema.parse(answer.summary)
  const described = new Map(summary.arrays.map((array) => [array.key, array]))
  const arrays = answer.arrays.map((array) => {
    const description = described.get(array.key)
    described.delete(array.key)
    if (!description || description.dataType !== array.dataType || `${description.shape}` !== `${array.shape}`) {
      throw new Error(
        `array ${array.key}: expected what the summary describes; found ${array.dataType}[${array.shape}]`,
      )
    }
    return { ...description, bytes: toBytes(array) }
  })
  if (described.size > 0) throw new Error(`arrays: expected ${[...described.keys()].join(', ')}; found none`)
  return { summary, arrays }
}
