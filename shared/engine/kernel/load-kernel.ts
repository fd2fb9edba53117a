/**
 * Loads the compiled map kernel: one warm instance a thread, instantiated synchronously from bytes in the bundle, the same
 * way in a page's web worker, a Node thread and a test. Where WebAssembly or its SIMD is missing there is no kernel, and the
 * plain one of `map.ts` computes the same numbers.
 */
import { mapKernelBase64 } from '../../../.kernel/map-kernel'

export interface KernelMemory {
  buffer: ArrayBuffer
  grow: (pages: number) => number
}

/** Exports of map-kernel.as; every argument is a byte offset or a count. */
export interface KernelExports {
  memory: KernelMemory
  heapBase: { value: number }
  transform: (buffer: number, length: number, twiddles: number) => void
  clearRows: (buffer: number, order: number, from: number, to: number) => void
  fillProduct: (
    buffer: number,
    order: number,
    samples: number,
    first: number,
    pr: number,
    pi: number,
    qr: number,
    qi: number,
    hr: number,
    hi: number,
    toeplitz: number,
  ) => void
  fillHermitian: (buffer: number, order: number, length: number, first: number, bank: number, third: number) => void
  keepBins: (buffer: number, middle: number, blockBytes: number, first: number, places: number, groups: number) => void
  gather: (buffer: number, order: number, block: number, count: number) => void
  gatherHermitian: (buffer: number, order: number, a: number, b: number, length: number) => void
  addProduct: (
    pr: number,
    pi: number,
    qr: number,
    qi: number,
    factor: number,
    outR: number,
    outI: number,
    count: number,
  ) => void
  addTriple: (
    pr: number,
    pi: number,
    qr: number,
    qi: number,
    hr: number,
    hi: number,
    outR: number,
    outI: number,
    count: number,
  ) => void
  scatter: (
    buffer: number,
    places: number,
    count: number,
    re: number,
    im: number,
    pitch: number,
    column: number,
  ) => void
}

/** What is used of the host's WebAssembly; the engine's own types know no host. */
interface Host {
  validate: (bytes: Uint8Array) => boolean
  Module: new (bytes: Uint8Array) => object
  Instance: new (module: object, imports: object) => { exports: unknown }
}

declare const WebAssembly: Host | undefined

const alphabet = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/'

const decoded = (base64: string): Uint8Array => {
  const text = base64.replace(/=+$/, '')
  const bytes = new Uint8Array(Math.floor((text.length * 3) / 4))
  let bits = 0
  let held = 0
  let at = 0
  for (const letter of text) {
    bits = (bits << 6) | alphabet.indexOf(letter)
    held += 6
    if (held < 8) continue
    held -= 8
    bytes[at++] = (bits >> held) & 255
  }
  return bytes
}

let kernel: KernelExports | null | undefined

/** The kernel of this thread; null where the host cannot run it. */
export const loadKernel = (): KernelExports | null => {
  if (kernel !== undefined) return kernel
  const host = typeof WebAssembly === 'undefined' ? undefined : WebAssembly
  const bytes = decoded(mapKernelBase64)
  if (!host?.validate(bytes)) {
    kernel = null
    return kernel
  }
  const abort = () => {
    throw new Error('the map kernel stopped: a table lies outside its memory')
  }
  kernel = new host.Instance(new host.Module(bytes), { env: { abort } }).exports as KernelExports
  return kernel
}
