import { toRaw } from 'vue'
import type { ParameterSet } from '#shared/schemas/parameter-set'

/**
 * A set while it is written. Numbers that cannot be read yet stay as the text that was typed, fields left empty are
 * undefined; the schema then names what is wrong with either.
 */
export type DraftValue = number | string | undefined | DraftValue[] | { [key: string]: DraftValue }
export type DraftSet = { [key: string]: DraftValue }
export type Path = readonly (string | number)[]

export const toDraft = (set: ParameterSet): DraftSet => structuredClone(toRaw(set)) as unknown as DraftSet

export const valueAt = (draft: DraftValue, path: Path): DraftValue =>
  path.reduce<DraftValue>(
    (value, key) =>
      typeof value === 'object' && value !== null ? (value as Record<string | number, DraftValue>)[key] : undefined,
    draft,
  )

/**
 * A copy with one value replaced; everything beside the path is shared with the original. `undefined` removes a key. Parents that do not exist yet
 * are made.
 */
export const withValue = <T extends DraftValue>(draft: T, path: Path, value: DraftValue): T => {
  const [key, ...rest] = path
  if (key === undefined) return value as T
  if (typeof key === 'number') {
    const list = Array.isArray(draft) ? [...draft] : []
    list[key] = withValue(list[key], rest, value)
    return list as DraftValue as T
  }
  const { [key]: before, ...others } = (typeof draft === 'object' && !Array.isArray(draft) ? draft : {}) as DraftSet
  const after = withValue(before, rest, value)
  if (after === undefined) return others as T
  // Keep the order of keys, so that a table of them does not jump.
  const copy = { ...(draft as DraftSet) }
  copy[key] = after
  return copy as T
}

/** The rows of a list with one removed. */
export const withoutRow = (draft: DraftSet, path: Path, index: number): DraftSet =>
  withValue(
    draft,
    path,
    (valueAt(draft, path) as DraftValue[]).filter((_, row) => row !== index),
  )

/** A legal, plain beginning: one acoustic bath and a narrow line, cold and warm. */
export const newDraft = (): DraftSet => ({
  zeroPhononEnergyMeV: 2000,
  bath: [{ kind: 'powerLaw', couplingStrength: 0.3, exponent: 3, cutoffEnergyMeV: 1.5, cutoffShape: 'gaussian' }],
  modes: [],
  zeroPhononFwhmMeV: 0.1,
  acousticBroadeningMeVPerK: 0,
  opticalBroadeningMeV: 0,
  ensembleFwhmMeV: 0,
  temperaturesK: [4, 20, 77],
  waitingTimesPs: [0, 1, 10],
})
