/**
 * Memory of the map kernel: a bump allocator that starts anew for every map, and the tables that depend on a length
 * only (order of the samples, twiddles), which are kept as bytes and copied in.
 */
import type { KernelExports } from './load-kernel'

export const ROW_BYTES = 64
const PAGE = 65536
const ALIGN = 64

export interface Placed {
  at: number
  values: Float64Array
}

/** Row of each sample for the depth-first radix-4 transform (radix 2 innermost when the length asks for it). */
const digitReversed = (length: number): Int32Array => {
  const order = new Int32Array(length)
  const place = (base: number, size: number, first: number, step: number): void => {
    if (size <= 2) {
      for (let k = 0; k < size; k++) order[first + k * step] = base + k
      return
    }
    for (let m = 0; m < 4; m++) place(base + (m * size) / 4, size / 4, first + m * step, 4 * step)
  }
  place(0, length, 0, 1)
  return order
}

/** Twiddles exp(+2 pi i j k/L), k = 1..3, for L = length, length/4, ... above 4. */
const twiddleTable = (length: number): Float64Array => {
  const numbers: number[] = []
  for (let size = length; size > 4; size /= 4) {
    for (let j = 0; j < size / 4; j++) {
      for (let k = 1; k <= 3; k++) {
        const angle = (2 * Math.PI * j * k) / size
        numbers.push(Math.cos(angle), Math.sin(angle))
      }
    }
  }
  return Float64Array.from(numbers)
}

const plans = new Map<number, { order: Int32Array; twiddles: Float64Array }>()

const planOf = (length: number) => {
  const known = plans.get(length)
  if (known) return known
  const plan = { order: digitReversed(length), twiddles: twiddleTable(length) }
  plans.set(length, plan)
  return plan
}

export class KernelHeap {
  private next: number

  constructor(readonly kernel: KernelExports) {
    this.next = kernel.heapBase.value
  }

  private take(bytes: number): number {
    const at = (this.next + ALIGN - 1) & ~(ALIGN - 1)
    this.next = at + bytes
    const { memory } = this.kernel
    const missing = this.next - memory.buffer.byteLength
    // Growing detaches earlier views: callers take all offsets first and make views afterwards.
    if (missing > 0) memory.grow(Math.ceil(missing / PAGE))
    return at
  }

  doubles(count: number): number {
    return this.take(8 * count)
  }

  rows(count: number): number {
    return this.take(ROW_BYTES * count)
  }

  view(at: number, count: number): Float64Array {
    return new Float64Array(this.kernel.memory.buffer, at, count)
  }

  /** Copies values in, with zeros up to `length`. */
  put(values: ArrayLike<number>, length: number): number {
    const at = this.doubles(length)
    const view = this.view(at, length)
    view.set(values)
    view.fill(0, values.length)
    return at
  }

  putIntegers(values: ArrayLike<number>): number {
    const at = this.take(4 * values.length)
    new Int32Array(this.kernel.memory.buffer, at, values.length).set(values)
    return at
  }

  plan(length: number): { order: number; rows: Int32Array; twiddles: number } {
    const { order, twiddles } = planOf(length)
    return { order: this.putIntegers(order), rows: order, twiddles: this.put(twiddles, twiddles.length) }
  }
}
