/**
 * One thing loaded from the server for as long as a component lives: data, error, pending, refresh. A newer load makes
 * an older answer void. Big arrays stay shallow.
 */
export const useResource = <T>(load: (signal: AbortSignal) => Promise<T>, on: () => unknown = () => null) => {
  const data = shallowRef<T | null>(null)
  const error = shallowRef<unknown>(null)
  const pending = ref(true)
  let current: AbortController | undefined

  const refresh = async (): Promise<void> => {
    current?.abort()
    const mine = (current = new AbortController())
    pending.value = true
    try {
      const answer = await load(mine.signal)
      if (mine.signal.aborted) return
      data.value = answer
      error.value = null
    } catch (failure) {
      if (mine.signal.aborted) return
      error.value = failure
    }
    pending.value = false
  }

  watch(on, () => void refresh(), { immediate: true })
  onScopeDispose(() => current?.abort())
  return { data, error, pending: readonly(pending), refresh }
}
