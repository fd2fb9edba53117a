import { ParameterSetSchema } from '#shared/schemas/parameter-set'
import { SetRequestSchema, SetVersionRequestSchema } from '#shared/schemas/set-requests'
import type { SetDetail } from '~/types/api'
import type { DraftSet } from '~/utils/draft'

/**
 * The open set of a page: loads it unless edits of it are kept already, validates while it is written, saves it as the
 * next version, and keeps the edits when somebody else saved first.
 */
export const useSetEditor = (groupId: string, setId?: string) => {
  const api = useApi()
  const store = useWorkingSetStore()
  const address = `/groups/${groupId}/sets`

  const latest = shallowRef<SetDetail | null>(null)
  const working = shallowRef(store.find(groupId, setId) ?? (setId ? undefined : store.openNew(groupId)))
  const loading = useResource(async (signal) => {
    if (!setId) return
    latest.value = await api.get<SetDetail>(`${address}/${setId}`, { signal })
    const kept = store.find(groupId, setId)
    const isStale = kept && !store.isEdited(kept) && kept.basedOn < latest.value.latestVersion
    working.value = kept && !isStale ? kept : store.open(groupId, latest.value)
  })

  const draft = computed<DraftSet>({
    get: () => working.value?.draft ?? {},
    set: (next) => {
      if (working.value) working.value.draft = next
    },
  })
  const parsed = computed(() => ParameterSetSchema.safeParse(draft.value))
  const isEdited = computed(() => working.value !== undefined && store.isEdited(working.value))
  /** Version that somebody saved while this one was being edited. */
  const newerVersion = computed(() =>
    latest.value && working.value?.setId && latest.value.latestVersion > working.value.basedOn
      ? latest.value.latestVersion
      : null,
  )

  /** Saves on top of `basedOn`; the working copy then rests on what came back. */
  const save = async (name: string, note: string, basedOn = working.value?.basedOn ?? 0): Promise<SetDetail> => {
    const parameters = draft.value
    const saved = setId
      ? await api.post<SetDetail>(
          `${address}/${setId}/versions`,
          validated(SetVersionRequestSchema, { parameters, note, basedOn }),
        )
      : await api.post<SetDetail>(address, validated(SetRequestSchema, { name, parameters, note }))
    // Whatever was typed while the request was under way stays an edit on top of the saved version.
    const isUntouched = draft.value === parameters
    const kept = store.open(groupId, saved)
    if (!isUntouched) kept.draft = draft.value
    if (!setId) store.close(groupId)
    else working.value = kept
    latest.value = saved
    return saved
  }

  const refreshLatest = async (): Promise<SetDetail | null> => {
    if (setId) latest.value = await api.get<SetDetail>(`${address}/${setId}`)
    return latest.value
  }
  const takeLatest = () => {
    if (latest.value) working.value = store.open(groupId, latest.value)
  }
  const discard = () => {
    if (setId && latest.value) takeLatest()
    else working.value = store.openNew(groupId)
  }
  const describe = (words: { name?: string; note?: string }) => {
    if (working.value) Object.assign(working.value, words)
  }
  const rename = async (name: string) => {
    latest.value = await api.patch<SetDetail>(`${address}/${setId}`, { name })
    if (working.value) working.value.name = latest.value.name
  }
  const remove = async () => {
    await api.remove(`${address}/${setId}`)
    store.close(groupId, setId)
  }

  return {
    loading,
    latest,
    working,
    draft,
    parsed,
    isEdited,
    newerVersion,
    save,
    refreshLatest,
    takeLatest,
    discard,
    describe,
    rename,
    remove,
  }
}
export type SetEditor = ReturnType<typeof useSetEditor>
