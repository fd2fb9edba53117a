import { formatPlain } from '#shared/figure/format'
import type { Range } from '#shared/figure/ticks'
import { compareCurves, overlaySeries, type LoadedCurve, type LoadedMeasurement } from '~/utils/overlay-fit'
import { formatCurves, overlayCurveId, parseCurves, parseIds, type OverlayCurve } from '~/utils/overlay-state'
import type { Run } from '~/types/api'
import type { Measurement } from '~/types/measurement'

/** A thing that could not be loaded: named, so that it can be taken out of the overlay. */
export interface OverlayLoss {
  key: string
  message: string
}

const energyIn = (text: string): number | null => {
  const value = text === '' ? NaN : Number(text)
  return Number.isFinite(value) ? value : null
}

/** An overlay of measurements and simulations. Its whole state is the page's address. */
export const useOverlay = (groupId: () => string) => {
  const api = useApi()
  const arrays = useRunArrays(groupId)
  const query = useQueryState()
  const measurementText = query.text('m')
  const curveText = query.text('s')
  const fromText = query.text('from')
  const toText = query.text('to')
  const scale = query.choice('axis', ['linear', 'log'] as const, 'linear')
  const chosenText = query.text('residual')

  const measurementIds = computed({
    get: () => parseIds(measurementText.value),
    set: (ids) => (measurementText.value = ids.join(',')),
  })
  const curves = computed({
    get: () => parseCurves(curveText.value),
    set: (list) => (curveText.value = formatCurves(list)),
  })
  /** Energies that take part in the comparison; null for all. */
  const range = computed<Range | null>(() => {
    const low = energyIn(fromText.value)
    const high = energyIn(toText.value)
    if (low === null && high === null) return null
    return { low: low ?? -Infinity, high: high ?? Infinity }
  })

  const knownMeasurements = new Map<string, Promise<LoadedMeasurement>>()
  const knownRuns = new Map<string, Promise<Run>>()
  const remember = <T>(known: Map<string, Promise<T>>, key: string, load: () => Promise<T>): Promise<T> => {
    const found = known.get(key) ?? load()
    known.set(key, found)
    found.catch(() => known.delete(key))
    return found
  }
  const loadMeasurement = (id: string) =>
    remember(knownMeasurements, id, async () => {
      const one = await api.get<Measurement>(`/groups/${groupId()}/measurements/${id}`)
      return {
        id,
        name: one.isInvented ? `${one.name} (invented)` : one.name,
        energiesMeV: Float64Array.from(one.energiesMeV),
        values: Float64Array.from(one.values),
        uncertainties: one.uncertainties ? Float64Array.from(one.uncertainties) : null,
      }
    })
  const loadRun = (runId: string) =>
    remember(knownRuns, runId, () => api.get<Run>(`/groups/${groupId()}/runs/${runId}`))

  const loadCurve = async (curve: OverlayCurve): Promise<LoadedCurve> => {
    const run = await loadRun(curve.runId)
    const t = curve.temperatureIndex
    const temperatureK = run.summary?.temperaturesK[t]
    if (temperatureK === undefined)
      throw new Error(`The run of ${run.set.name} has no stored spectrum number ${t + 1}.`)
    const [energies, values] = await arrays.getAll(run.id, [`linear/${t}/energies`, `${curve.kind}/${t}`])
    if (!energies || !values) throw new Error('The spectrum is incomplete.')
    const at = `${formatPlain(temperatureK)} K`
    return {
      curve,
      id: overlayCurveId(curve),
      label: `${run.set.name} version ${run.set.version}, ${at}, ${curve.kind}`,
      shortLabel: at,
      temperatureK,
      energiesMeV: asDouble(energies),
      values: asDouble(values),
    }
  }

  const settle = async <T>(keys: readonly string[], load: (key: string, index: number) => Promise<T>) => {
    const outcomes = await Promise.allSettled(keys.map((key, index) => load(key, index)))
    const loaded: T[] = []
    const lost: OverlayLoss[] = []
    outcomes.forEach((outcome, index) => {
      if (outcome.status === 'fulfilled') loaded.push(outcome.value)
      else lost.push({ key: keys[index] ?? '', message: messageOf(outcome.reason) })
    })
    return { loaded, lost }
  }
  const loadedMeasurements = useResource(
    () => settle(measurementIds.value, (id) => loadMeasurement(id)),
    () => measurementIds.value.join(),
  )
  // Scale and offset change often and need nothing from the server, so they are not part of the key.
  const loadedCurves = useResource(
    () => {
      const list = curves.value
      return settle(list.map(overlayCurveId), (_, index) => loadCurve(list[index] as OverlayCurve))
    },
    () => curves.value.map(overlayCurveId).join(),
  )

  const measurements = computed(() => loadedMeasurements.data.value?.loaded ?? [])
  const current = computed<LoadedCurve[]>(() => {
    const byId = new Map((loadedCurves.data.value?.loaded ?? []).map((loaded) => [loaded.id, loaded]))
    const list = curves.value.flatMap((curve) => {
      const loaded = byId.get(overlayCurveId(curve))
      return loaded ? [{ ...loaded, curve }] : []
    })
    // Where several sets or kinds stand together, the temperature alone would not name a curve.
    const named = new Set(list.map((one) => `${one.curve.runId} ${one.curve.kind}`)).size > 1
    return named ? list.map((one) => ({ ...one, shortLabel: one.label })) : list
  })
  const rows = computed(() => compareCurves(current.value, measurements.value, range.value))
  const residualOf = computed({
    get: () => {
      const ids = rows.value.filter((row) => row.fit?.ok).map((row) => row.loaded.id)
      return ids.includes(chosenText.value) ? chosenText.value : (ids[0] ?? null)
    },
    set: (id) => (chosenText.value = id ?? ''),
  })
  const series = computed(() => overlaySeries(rows.value, measurements.value, residualOf.value))
  const lost = computed(() => [
    ...(loadedMeasurements.data.value?.lost ?? []),
    ...(loadedCurves.data.value?.lost ?? []),
  ])

  const addMeasurement = (id: string) => {
    measurementIds.value = [...measurementIds.value, id]
  }
  const changeCurve = (id: string, change: Partial<OverlayCurve>) => {
    curves.value = curves.value.map((curve) => (overlayCurveId(curve) === id ? { ...curve, ...change } : curve))
  }
  const addCurve = (curve: Pick<OverlayCurve, 'runId' | 'temperatureIndex' | 'kind'>) => {
    curves.value = [...curves.value, { ...curve, against: 0, scale: null, offset: null }]
  }
  const drop = (key: string) => {
    if (measurementIds.value.includes(key)) measurementIds.value = measurementIds.value.filter((id) => id !== key)
    else curves.value = curves.value.filter((curve) => overlayCurveId(curve) !== key)
  }

  return {
    measurementIds,
    measurements,
    curves,
    rows,
    series,
    scale,
    fromText,
    toText,
    range,
    residualOf,
    lost,
    pending: computed(() => loadedMeasurements.pending.value || loadedCurves.pending.value),
    loadRun,
    addMeasurement,
    addCurve,
    changeCurve,
    drop,
  }
}
export type Overlay = ReturnType<typeof useOverlay>
