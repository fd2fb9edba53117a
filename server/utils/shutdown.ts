import { logger } from './logger'

/**
 * What has to end when the process ends. `drain`: at the first signal, at once and in parallel (streams, job loops);
 * otherwise they would hold the web server open until its deadline. `close`: after the last request (pools).
 */
type Phase = 'drain' | 'close'

const registered: Record<Phase, { name: string; end: () => Promise<unknown> | unknown }[]> = { drain: [], close: [] }
const ended = new Map<Phase, Promise<void>>()
let refusing = false

/** Registers a part; one that registers after its phase began is ended at once. */
export const onShutdown = (name: string, end: () => Promise<unknown> | unknown, phase: Phase = 'drain'): void => {
  registered[phase].push({ name, end })
  if (ended.has(phase)) void endPart(name, end)
}

export const isShuttingDown = (): boolean => ended.has('drain')

/** After a crash the process answers 503 until it is gone. A plain stop keeps answering what has already arrived. */
export const refuseRequests = (): void => {
  refusing = true
}
export const refusesRequests = (): boolean => refusing

const endPart = async (name: string, end: () => Promise<unknown> | unknown): Promise<void> => {
  try {
    await end()
  } catch (error) {
    logger.error({ event: 'shutdown.failed', part: name, err: error })
  }
}

/** Runs a phase once; a failing part is logged and does not keep the others from ending. */
export const endPhase = (phase: Phase): Promise<void> => {
  const before = ended.get(phase)
  if (before) return before
  const ending = Promise.all(registered[phase].map(({ name, end }) => endPart(name, end))).then(() => undefined)
  ended.set(phase, ending)
  return ending
}
