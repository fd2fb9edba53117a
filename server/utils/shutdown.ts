import { logger } from './logger'

/**
 * What has to end when the process ends. `drain`: at the first signal, at once and in parallel (streams, job loops);
 * otherwise they would hold the web server open until its deadline. `close`: after the last request (pools).
 */
type Phase = 'drain' | 'close'

const registered: Record<Phase, { name: string; end: () => Promise<unknown> | unknown }[]> = { drain: [], close: [] }
const ended = new Map<Phase, Promise<void>>()

export const onShutdown = (name: string, end: () => Promise<unknown> | unknown, phase: Phase = 'drain'): void => {
  registered[phase].push({ name, end })
}

export const isShuttingDown = (): boolean => ended.has('drain')

/** Runs a phase once; a failing part is logged and does not keep the others from ending. */
export const endPhase = (phase: Phase): Promise<void> => {
  const before = ended.get(phase)
  if (before) return before
  const ending = Promise.all(
    registered[phase].map(async ({ name, end }) => {
      try {
        await end()
      } catch (error) {
        logger.error({ event: 'shutdown.failed', part: name, err: error })
      }
    }),
  ).then(() => undefined)
  ended.set(phase, ending)
  return ending
}
