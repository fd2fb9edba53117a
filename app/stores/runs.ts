import { defineStore } from 'pinia'
import type { Run, RunEvent } from '~/types/api'
import { openRunFeed } from '~/utils/run-feed'

const isActive = (run: Run): boolean => run.state === 'queued' || run.state === 'running'

/** The runs of the open group, kept current by one event stream for all pages. */
export const useRunsStore = defineStore('runs', () => {
  const api = useApi()
  const byId = shallowRef<ReadonlyMap<string, Run>>(new Map())
  const loaded = ref(false)
  let groupId = ''
  let feed: { close: () => void } | undefined

  const all = computed(() => [...byId.value.values()].sort((a, b) => b.queuedAt.localeCompare(a.queuedAt)))
  const active = computed(() => all.value.filter(isActive))

  const keep = (run: Run) => (byId.value = new Map(byId.value).set(run.id, run))

  const refresh = async (): Promise<void> => {
    const asked = groupId
    const { runs } = await api.get<{ runs: Run[] }>(`/groups/${asked}/runs`)
    if (asked !== groupId) return
    byId.value = new Map(runs.map((run) => [run.id, run]))
    loaded.value = true
  }

  const refreshOne = async (runId: string): Promise<void> => {
    const asked = groupId
    const run = await api.get<Run>(`/groups/${asked}/runs/${runId}`)
    if (asked === groupId) keep(run)
  }

  const onRun = (event: RunEvent) => {
    const run = byId.value.get(event.id)
    if (run?.state === event.state) keep({ ...run, ...event })
    // A run of someone else, or a change of state that carries more than the event tells.
    else refreshOne(event.id).catch(() => undefined)
  }

  const leave = () => {
    feed?.close()
    feed = undefined
    groupId = ''
    byId.value = new Map()
    loaded.value = false
  }

  const enter = (id: string) => {
    if (id === groupId) return
    leave()
    groupId = id
    feed = openRunFeed(id, {
      onRun,
      // A failed look is repeated by the next one; the pages keep showing the last known state.
      onResync: () => void refresh().catch(() => undefined),
    })
    void refresh().catch(() => undefined)
  }

  const request = async (setId: string, version: number): Promise<Run> => {
    const run = await api.post<Run>(`/groups/${groupId}/runs`, { setId, version })
    keep(run)
    return run
  }
  const cancel = async (runId: string): Promise<void> => {
    await api.post(`/groups/${groupId}/runs/${runId}/cancel`)
    await refreshOne(runId)
  }
  const retry = async (runId: string): Promise<void> => {
    await api.post(`/groups/${groupId}/runs/${runId}/retry`)
    await refreshOne(runId)
  }

  return {
    all,
    active,
    loaded,
    byId,
    ofSet: (setId: string) => all.value.filter((run) => run.set.id === setId),
    enter,
    leave,
    refresh,
    request,
    cancel,
    retry,
  }
})
