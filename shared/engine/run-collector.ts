import type { ArrayDescription, MeasuredQuantity, RunSummary } from '../schemas/run'
import { hashOf } from '../utils/canonical'
import { assertFinite, stopped, type RunArray } from './run-types'
import type { ComplexSeries, WorkHooks } from './types'

const bytesOf = (data: Float64Array | Float32Array): Uint8Array =>
  new Uint8Array(data.buffer, data.byteOffset, data.byteLength)

const interleaved = <T extends Float64Array | Float32Array>(values: ComplexSeries, out: T): T => {
  const { re, im } = values
  for (let i = 0; i < re.length; i++) {
    out[2 * i] = re[i]!
    out[2 * i + 1] = im[i]!
  }
  return out
}

/** Gathers what a run computes; checks, describes and hashes it; keeps the progress and the stop flag. */
export class RunCollector {
  readonly arrays: RunArray[] = []
  readonly descriptions: ArrayDescription[] = []
  readonly quantities: RunSummary['quantities'] = []
  readonly notes: string[] = []
  broadeningError = 0
  private done = 0

  constructor(
    private readonly hooks: WorkHooks,
    private readonly totalWork: number,
  ) {}

  readonly shouldStop = (): boolean => this.hooks.shouldStop?.() ?? false

  /** Between pieces of work: leaves the computation when it is to stop. */
  poll(): void {
    if (this.shouldStop()) throw stopped()
  }

  /** Books finished work; the fraction never falls and reaches 1 only at the end. */
  advance(work: number): void {
    this.done += work
    this.hooks.onProgress?.(Math.min(1, this.done / this.totalWork))
    this.poll()
  }

  measure(temperatureIndex: number, waitingTimeIndex: number | null, curve: string, values: MeasuredQuantity[]): void {
    this.quantities.push({ temperatureIndex, waitingTimeIndex, curve, values })
  }

  /** A real line, stored as it is. */
  add(key: string, unit: string, data: Float64Array): void {
    this.put({ key, dataType: 'float64', shape: [data.length], unit, data }, bytesOf(data))
  }

  /** A complex line, stored as it is. */
  addComplex(key: string, unit: string, values: ComplexSeries): void {
    const data = interleaved(values, new Float64Array(2 * values.re.length))
    this.put({ key, dataType: 'complex128', shape: [values.re.length], unit, data }, bytesOf(data))
  }

  /** A real map, stored in single precision under the hash of its double-precision bytes. */
  addMap(key: string, unit: string, side: number, data: Float64Array): void {
    this.put({ key, dataType: 'float32', shape: [side, side], unit, data: Float32Array.from(data) }, bytesOf(data))
  }

  addComplexMap(key: string, unit: string, side: number, values: ComplexSeries): void {
    const exact = interleaved(values, new Float64Array(2 * values.re.length))
    const data = interleaved(values, new Float32Array(2 * values.re.length))
    this.put({ key, dataType: 'complex64', shape: [side, side], unit, data }, bytesOf(exact))
  }

  private put(array: RunArray, exactBytes: Uint8Array): void {
    assertFinite(array.key, array.data)
    const { key, dataType, shape, unit } = array
    this.arrays.push(array)
    this.descriptions.push({ key, dataType, shape, unit, sha256: hashOf(exactBytes) })
  }
}
