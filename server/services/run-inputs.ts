import { ENGINE_VERSION } from '../../shared/engine/engine-version'
import { estimateRun } from '../../shared/engine/run'
import { AppError } from '../../shared/errors/app-error'
import type { ParameterSet } from '../../shared/schemas/parameter-set'
import { contentHash } from '../../shared/utils/canonical'
import { limits } from '../../shared/utils/limits'

/** The name of a computation: equal inputs to an equal engine give an equal name, and so one stored result. */
export const inputHashOf = (parameters: ParameterSet): string =>
  contentHash({ kind: 'lineShapes', engineVersion: ENGINE_VERSION, parameters })

const mebibytes = (bytes: number) => `${Math.ceil(bytes / 1024 / 1024)} MiB`

/**
 * Refuses before anything is queued what the engine would have to refuse later, with the grid it would need, and what
 * would not fit into the memory of a process: the arrays of a run are held until all of them are stored.
 */
export const assertComputable = (parameters: ParameterSet): void => {
  const { refusal, bytes, mapGrid } = estimateRun(parameters)
  if (refusal) throw new AppError(refusal.code, { detail: refusal.message, issues: refusal.issues })
  if (bytes <= limits.runBytes) return
  const side = Math.max(...mapGrid.map(({ paddedSamples }) => paddedSamples))
  const maps = parameters.temperaturesK.length * parameters.waitingTimesPs.length
  const message = `expected results of at most ${mebibytes(limits.runBytes)}; these parameters need ${maps} maps of up to ${side} x ${side} points, ${mebibytes(bytes)} in all. Use fewer temperatures or waiting times, or a smaller grid.`
  throw new AppError('run/grid-too-large', { detail: message, issues: [{ path: ['waitingTimesPs'], message }] })
}
