import type { MeasuredQuantity, RunSummary } from '#shared/schemas/run'

/** Headings of the groups of measured quantities, by the curve they belong to. */
const curveTitles: Record<string, string> = {
  model: 'Model',
  absorption: 'Absorption',
  emission: 'Emission',
  absorptionAndEmission: 'Absorption and emission',
  map: 'Two-dimensional map',
}
export const curveTitle = (curve: string): string => curveTitles[curve] ?? curve

/**
 * A measured quantity at sensible digits: four, but absolute energies keep their thousandths, because a line of 2 meV
 * at 2000 meV lies in the last of four digits.
 */
export const formatQuantityValue = (value: number): string => {
  const size = Math.abs(value)
  return formatNumber(value, size >= 1000 && size < 1e6 ? Math.floor(Math.log10(size)) + 4 : 4)
}

export interface QuantityGroup {
  curve: string
  values: MeasuredQuantity[]
}

/** Groups of quantities at one temperature, and at one waiting time where they belong to a map. */
export const quantityGroupsAt = (
  summary: RunSummary,
  temperatureIndex: number,
  waitingTimeIndex: number,
): QuantityGroup[] =>
  summary.quantities
    .filter(
      (group) =>
        group.temperatureIndex === temperatureIndex &&
        (group.waitingTimeIndex === null || group.waitingTimeIndex === waitingTimeIndex),
    )
    .map(({ curve, values }) => ({ curve, values }))

/** Columns of a CSV file with every measured quantity of a run, one line each. */
export const quantityColumns = (summary: RunSummary) => {
  const rows = summary.quantities.flatMap((group) => group.values.map((quantity) => ({ group, quantity })))
  const column = (name: string, of: (row: (typeof rows)[number]) => string | number | null) => ({
    name,
    values: rows.map(of),
  })
  return [
    column('temperature (K)', ({ group }) => summary.temperaturesK[group.temperatureIndex] ?? null),
    column('waiting time (ps)', ({ group }) =>
      group.waitingTimeIndex === null ? null : (summary.waitingTimesPs[group.waitingTimeIndex] ?? null),
    ),
    column('of', ({ group }) => curveTitle(group.curve)),
    column('quantity', ({ quantity }) => quantity.name),
    column('value', ({ quantity }) => quantity.value),
    column('unit', ({ quantity }) => quantity.unit),
    column('reason', ({ quantity }) => quantity.reason ?? ''),
  ]
}
