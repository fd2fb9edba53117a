import '../utils/zod-jitless'
import { computePreview } from '../../shared/engine/preview'
import { estimateRun } from '../../shared/engine/run'
import type { PreviewAnswer, PreviewRequest } from '../utils/preview-queue'

/** The engine off the page's own thread: a request in, curves out, buffers moved. Nothing leaves the browser. */
const answer = ({ id, set, temperatureK, waitingTimePs }: PreviewRequest): PreviewAnswer => {
  try {
    const began = performance.now()
    const preview = computePreview(set, temperatureK, waitingTimePs)
    const elapsedMs = performance.now() - began
    return { id, ok: true, preview, elapsedMs, estimate: estimateRun(set) }
  } catch (error) {
    return { id, ok: false, message: error instanceof Error ? error.message : String(error) }
  }
}

const buffersOf = (value: unknown, found: Set<ArrayBuffer> = new Set()): Set<ArrayBuffer> => {
  if (ArrayBuffer.isView(value)) {
    if (value.buffer instanceof ArrayBuffer) found.add(value.buffer)
  } else if (typeof value === 'object' && value !== null) {
    for (const inner of Object.values(value)) buffersOf(inner, found)
  }
  return found
}

addEventListener('message', ({ data }: MessageEvent<PreviewRequest>) => {
  const result = answer(data)
  postMessage(result, { transfer: [...buffersOf(result)] })
})
