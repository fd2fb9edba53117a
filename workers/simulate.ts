import { move, transferableSymbol, valueSymbol } from 'piscina'
import { computeRun } from '../shared/engine/run'
import { SimulateMessageSchema } from '../shared/schemas/worker-messages'

export type SimulateAnswer = ReturnType<typeof computeRun>
export type ComputedArray = Extract<SimulateAnswer, { ok: true }>['arrays'][number]

const refusal = (code: string, message: string, issues: { path: (string | number)[]; message: string }[] = []) =>
  ({ ok: false, code, message, issues }) as SimulateAnswer

/**
 * Thread entry: one parameter set in, its spectra and maps out. Errors are answers, because an error thrown out of a
 * thread loses its class and its fields.
 */
export const simulate = (message: unknown): unknown => {
  const parsed = SimulateMessageSchema.safeParse(message)
  if (!parsed.success) {
    const issues = parsed.error.issues.map(({ path, message: text }) => ({
      path: path.filter((key) => typeof key !== 'symbol'),
      message: text,
    }))
    return refusal('engine/invalid', 'The stored parameters are not a valid set for this engine.', issues)
  }
  const { parameters, stop, port } = parsed.data
  port.postMessage({ type: 'started' })
  let reported = 0
  try {
    const answer = computeRun(parameters, {
      shouldStop: () => Atomics.load(stop, 0) !== 0,
      onProgress: (fraction) => {
        // Half a percent is more than anybody sees; a report costs the other thread a wake-up.
        if (fraction < 1 && fraction - reported < 0.005) return
        reported = fraction
        port.postMessage({ type: 'progress', fraction })
      },
    })
    return answer.ok ? withBuffersMoved(answer) : answer
  } catch (error) {
    return refusal('run/failed', error instanceof Error ? error.message : String(error))
  }
}

/** Hands the arrays over instead of copying them. */
const withBuffersMoved = (answer: Extract<SimulateAnswer, { ok: true }>) => {
  const buffers = new Set(answer.arrays.map(({ data }) => data.buffer))
  return move({
    get [transferableSymbol]() {
      return [...buffers]
    },
    get [valueSymbol]() {
      return answer
    },
  } as unknown as Parameters<typeof move>[0])
}
