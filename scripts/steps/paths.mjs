import { resolve } from 'node:path'
import { dataRoot, projectRoot } from '../postgres/place.mjs'

export { dataRoot, projectRoot }

/** A path inside the checkout. */
export const inProject = (...parts) => resolve(projectRoot, ...parts)

/** A path inside the git-ignored data folder (`LINEWRIGHT_DATA` moves it). */
export const inData = (...parts) => resolve(dataRoot(), ...parts)

/** Compiled helpers of the scripts; beside the packages they import. */
export const inCache = (...parts) => inProject('node_modules/.cache/linewright', ...parts)
