import type { Measurement, MeasurementItem } from '~/types/measurement'

/** The measurements of a group, newest first. */
export const useMeasurements = (groupId: () => string) => {
  const api = useApi()
  const resource = useResource(
    async (signal) => {
      const path = `/groups/${groupId()}/measurements`
      const { measurements } = await api.get<{ measurements: MeasurementItem[] }>(path, { signal })
      return [...measurements].sort((a, b) => b.createdAt.localeCompare(a.createdAt))
    },
    () => groupId(),
  )
  const remove = (measurementId: string) => api.remove(`/groups/${groupId()}/measurements/${measurementId}`)
  return { ...resource, remove }
}

/** One measurement with its points. */
export const useMeasurement = (groupId: () => string, measurementId: () => string) => {
  const api = useApi()
  return useResource(
    (signal) => api.get<Measurement>(`/groups/${groupId()}/measurements/${measurementId()}`, { signal }),
    () => `${groupId()} ${measurementId()}`,
  )
}
