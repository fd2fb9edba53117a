/**
 * View state in the address, so that a view can be bookmarked and handed to a colleague. Values equal to the default
 * are left out. Changes replace the history entry: moving a ruler is not a step to go back to.
 */
export const useQueryState = () => {
  const route = useRoute()
  const router = useRouter()
  let waiting: Record<string, string | undefined> = {}
  let isQueued = false

  const flush = () => {
    isQueued = false
    const query = { ...route.query, ...waiting }
    waiting = {}
    void router.replace({ query: Object.fromEntries(Object.entries(query).filter(([, value]) => value !== undefined)) })
  }
  // Several values set at once become one change of the address.
  const write = (key: string, value: string | undefined) => {
    waiting[key] = value
    if (isQueued) return
    isQueued = true
    void nextTick(flush)
  }
  const read = (key: string): string | undefined => {
    const value = route.query[key]
    return typeof value === 'string' ? value : undefined
  }

  const choice = <T extends string>(key: string, values: readonly T[], fallback: T) => {
    const state = ref(values.find((value) => value === read(key)) ?? fallback) as Ref<T>
    watch(state, (value) => write(key, value === fallback ? undefined : value))
    return state
  }
  const index = (key: string) => {
    const given = read(key)
    const state = ref(given !== undefined && /^\d{1,4}$/.test(given) ? Number(given) : 0)
    watch(state, (value) => write(key, value === 0 ? undefined : String(value)))
    return state
  }
  const text = (key: string) => {
    const state = ref(read(key) ?? '')
    watch(state, (value) => write(key, value === '' ? undefined : value))
    return state
  }
  return { choice, index, text }
}
