import { defineStore } from 'pinia'
import { contentHash } from '#shared/utils/canonical'
import { ParameterSetSchema } from '#shared/schemas/parameter-set'
import type { SetDetail } from '~/types/api'
import { newDraft, toDraft, type DraftSet } from '~/utils/draft'

/** One set that is open for editing: what is typed, and the version it grew from. */
export interface WorkingSet {
  groupId: string
  /** Absent while the set has never been saved. */
  setId?: string
  name: string
  draft: DraftSet
  note: string
  /** Number of the version the edits rest on; 0 for a new set. */
  basedOn: number
  /** Hash of the draft as it was opened or saved, to tell edits from none. */
  savedHash: string
}

const keyOf = (groupId: string, setId?: string): string => `${groupId}/${setId ?? 'new'}`

/** Equal hashes mean equal sets; a draft that is not valid yet is named by its own text. */
export const draftHash = (draft: DraftSet): string => {
  const parsed = ParameterSetSchema.safeParse(draft)
  return contentHash(parsed.success ? parsed.data : draft)
}

/** Edited sets outlive their page: leaving it and coming back finds every value as it was typed. */
export const useWorkingSetStore = defineStore('working-set', () => {
  const sets = shallowReactive(new Map<string, WorkingSet>())

  const find = (groupId: string, setId?: string): WorkingSet | undefined => sets.get(keyOf(groupId, setId))

  const put = (set: WorkingSet): WorkingSet => {
    const kept = shallowReactive({ ...set })
    sets.set(keyOf(set.groupId, set.setId), kept)
    return kept
  }

  const openNew = (groupId: string, start?: { name: string; draft: DraftSet }): WorkingSet =>
    put({
      groupId,
      name: start?.name ?? '',
      draft: start?.draft ?? newDraft(),
      note: '',
      basedOn: 0,
      // A new set is unsaved from its first moment only when it was brought from somewhere.
      savedHash: start ? '' : draftHash(newDraft()),
    })

  const open = (groupId: string, detail: SetDetail): WorkingSet => {
    const draft = toDraft(detail.version.parameters)
    return put({
      groupId,
      setId: detail.id,
      name: detail.name,
      draft,
      note: '',
      basedOn: detail.version.version,
      savedHash: draftHash(draft),
    })
  }

  const close = (groupId: string, setId?: string) => sets.delete(keyOf(groupId, setId))
  const isEdited = (set: WorkingSet): boolean => draftHash(set.draft) !== set.savedHash
  const hasEdits = computed(() => [...sets.values()].some(isEdited))
  const clear = () => sets.clear()

  return { sets, find, openNew, open, close, isEdited, hasEdits, clear }
})
