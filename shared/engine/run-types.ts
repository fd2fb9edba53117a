import type { Issue } from '../errors/app-error'
import type { ArrayDescription, RunSummary } from '../schemas/run'

/** One stored array: what it is called, how its bytes read, and the numbers. */
export interface RunArray extends Pick<ArrayDescription, 'key' | 'dataType' | 'shape' | 'unit'> {
  /** Complex types interleave real and imaginary parts. */
  data: Float64Array | Float32Array
}

export interface RunFailure {
  ok: false
  code: 'run/grid-too-large' | 'engine/invalid' | 'engine/not-finite' | 'engine/stopped' | 'engine/self-check'
  message: string
  issues: Issue[]
}

export type RunAnswer = { ok: true; summary: RunSummary; arrays: RunArray[] } | RunFailure

/** Ends a computation from within; caught at the entry point and returned as an answer. */
export class RunInterruption extends Error {
  constructor(readonly failure: RunFailure) {
    super(failure.message)
  }
}

export const stopped = (): RunInterruption =>
  new RunInterruption({ ok: false, code: 'engine/stopped', message: 'The computation was stopped.', issues: [] })

/** Refuses a stage whose numbers are not all finite, naming it. */
export const assertFinite = (stage: string, ...arrays: ArrayLike<number>[]): void => {
  for (const array of arrays) {
    for (let i = 0; i < array.length; i++) {
      if (Number.isFinite(array[i])) continue
      throw new RunInterruption({
        ok: false,
        code: 'engine/not-finite',
        message: `${stage}: expected finite numbers; found ${array[i]} at index ${i} of ${array.length}`,
        issues: [],
      })
    }
  }
}
