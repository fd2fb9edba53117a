import type { Preview } from '#shared/engine/preview'
import type { RunEstimate } from '#shared/engine/run'
import type { ParameterSet } from '#shared/schemas/parameter-set'

export interface PreviewRequest {
  id: number
  set: ParameterSet
  temperatureK: number
  waitingTimePs: number
}

export type PreviewAnswer =
  | { id: number; ok: true; preview: Preview; estimate: RunEstimate; elapsedMs: number }
  | { id: number; ok: false; message: string }

export type PreviewInput = Omit<PreviewRequest, 'id'>

/** After this long a newer request no longer waits for the older one. */
const patienceMs = 3000

/**
 * Hands previews to a worker, one at a time; of the requests that arrive meanwhile only the latest is kept. A
 * computation that outlives its welcome is ended with its thread once a newer request waits.
 */
export const createPreviewQueue = (
  spawn: () => Worker,
  onAnswer: (answer: PreviewAnswer, input: PreviewInput | undefined) => void,
) => {
  let worker: Worker | undefined
  let running: { id: number; since: number; input: PreviewInput } | undefined
  let waiting: PreviewInput | undefined
  let impatience: ReturnType<typeof setTimeout> | undefined
  let lastId = 0

  const stop = () => {
    clearTimeout(impatience)
    impatience = undefined
    worker?.terminate()
    worker = undefined
    running = undefined
  }

  const start = (): Worker => {
    const fresh = spawn()
    fresh.onmessage = ({ data }: MessageEvent<PreviewAnswer>) => settle(data)
    fresh.onerror = (event) => {
      event.preventDefault()
      const failed = running
      stop()
      running = failed
      settle({
        id: failed?.id ?? lastId,
        ok: false,
        message: event.message || 'The preview could not be computed in this browser.',
      })
    }
    return fresh
  }

  const next = () => {
    if (running || !waiting) return
    const wanted = waiting
    waiting = undefined
    worker ??= start()
    running = { id: ++lastId, since: Date.now(), input: wanted }
    worker.postMessage({ id: running.id, ...wanted })
  }

  const settle = (answer: PreviewAnswer) => {
    clearTimeout(impatience)
    impatience = undefined
    const input = running?.input
    running = undefined
    onAnswer(answer, input)
    next()
  }

  const request = (wanted: PreviewInput) => {
    waiting = wanted
    if (running) {
      impatience ??= setTimeout(
        () => {
          stop()
          next()
        },
        Math.max(0, running.since + patienceMs - Date.now()),
      )
    }
    next()
  }

  return { request, stop: () => ((waiting = undefined), stop()) }
}
