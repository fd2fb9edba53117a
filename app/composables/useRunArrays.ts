import type { RunArray } from '~/utils/run-array'

/** Bytes of arrays that one page keeps; the least recently used go first. */
const keptBytes = 256 * 1024 * 1024

/** Stored arrays of runs, fetched once and kept while the page lives. They never change: a run's result is final. */
export const useRunArrays = (groupId: () => string) => {
  const api = useApi()
  const kept = new Map<string, Promise<RunArray>>()
  const sizes = new Map<string, number>()

  const forget = (address: string) => {
    kept.delete(address)
    sizes.delete(address)
  }
  const trim = () => {
    let total = [...sizes.values()].reduce((sum, size) => sum + size, 0)
    for (const [address, size] of sizes) {
      if (total <= keptBytes || sizes.size === 1) return
      forget(address)
      total -= size
    }
  }

  const fetchArray = async (address: string, key: string): Promise<RunArray> => {
    const response = await api.raw(address)
    const array = toRunArray(key, response.headers, await response.arrayBuffer())
    sizes.set(address, array.data.byteLength)
    trim()
    return array
  }

  const get = (runId: string, key: string): Promise<RunArray> => {
    const address = `/groups/${groupId()}/runs/${runId}/arrays/${key}`
    const known = kept.get(address)
    if (known) {
      const size = sizes.get(address)
      if (size !== undefined) {
        // Seen again: to the end of the line.
        sizes.delete(address)
        sizes.set(address, size)
      }
      return known
    }
    const asked = fetchArray(address, key)
    kept.set(address, asked)
    // A failure is not kept: the next look asks again.
    asked.catch(() => forget(address))
    return asked
  }

  const getAll = (runId: string, keys: readonly string[]): Promise<RunArray[]> =>
    Promise.all(keys.map((key) => get(runId, key)))

  onScopeDispose(() => {
    kept.clear()
    sizes.clear()
  })
  return { get, getAll }
}
export type RunArrays = ReturnType<typeof useRunArrays>
