import type { Run } from '~/types/api'

const isFinal = (run: Run): boolean => ['done', 'failed', 'cancelled'].includes(run.state)

/**
 * One run with its summary. State and progress come from the group's event stream; whenever the stream tells of a new
 * state or attempt, the run itself is asked for again.
 */
export const useRun = (groupId: () => string, runId: () => string) => {
  const api = useApi()
  const runs = useRunsStore()
  const live = computed(() => runs.byId.get(runId()))
  const resource = useResource(
    (signal) => api.get<Run>(`/groups/${groupId()}/runs/${runId()}`, { signal }),
    () => [groupId(), runId(), live.value?.state, live.value?.attempt].join(' '),
  )
  const run = computed<Run | null>(() => {
    const fetched = resource.data.value
    if (!fetched || fetched.id !== runId()) return null
    const heard = live.value
    // What was fetched last may be ahead of the stream, never the other way round once it is final.
    if (!heard || (isFinal(fetched) && fetched.attempt >= heard.attempt)) return fetched
    const { state, progress, secondsLeft, attempt, queuePlace, failure } = heard
    return { ...fetched, state, progress, secondsLeft, attempt, failure, queuePlace: queuePlace ?? fetched.queuePlace }
  })
  return { run, pending: resource.pending, error: resource.error, refresh: resource.refresh }
}
