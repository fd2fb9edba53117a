import { toCsv } from './csv'
import { formatDigits, quantityOf, unitOf } from './format'
import type { MapFigure, MapPlace } from './map-description'
import { nearestSample } from './map-layout'

const extremes = (values: ArrayLike<number>): { lowest: number; highest: number } => {
  let lowest = 0
  let highest = 0
  for (let i = 1; i < values.length; i++) {
    if ((values[i] as number) < (values[lowest] as number)) lowest = i
    if ((values[i] as number) > (values[highest] as number)) highest = i
  }
  return { lowest, highest }
}

/** Value of the map at the sample nearest to a place. */
export const mapValueAt = (figure: MapFigure, place: MapPlace): { place: MapPlace; value: number } => {
  const i = nearestSample(figure.energies1, place.energy1)
  const j = nearestSample(figure.energies3, place.energy3)
  return {
    place: { energy1: figure.energies1[i] ?? NaN, energy3: figure.energies3[j] ?? NaN },
    value: figure.values[i * figure.energies3.length + j] ?? NaN,
  }
}

/** What a map shows, in sentences, for a reader who cannot see it. */
export const summarizeMap = (figure: MapFigure): string => {
  const head = `${quantityOf(figure.valueLabel ?? '') || 'Map'} over ${quantityOf(figure.xLabel)} and ${quantityOf(figure.yLabel)}`
  const columns = figure.energies3.length
  if (figure.values.length === 0 || columns === 0) return `${head}: nothing to show yet.`
  const { lowest, highest } = extremes(figure.values)
  const at = (index: number) => {
    const energy1 = figure.energies1[Math.floor(index / columns)] as number
    const energy3 = figure.energies3[index % columns] as number
    return `${formatDigits(figure.values[index] as number)} at excitation ${formatDigits(energy1, 6)}, detection ${formatDigits(energy3, 6)}${unitOf(figure.xLabel) ? ` ${unitOf(figure.xLabel)}` : ''}`
  }
  const minimum = figure.signed ? `; minimum ${at(lowest)}` : ''
  return `${head}. Maximum ${at(highest)}${minimum}.`
}

/** The shown part of a map, one line a sample: excitation energy, detection energy, value. */
export const mapFigureCsv = (figure: MapFigure): string => {
  const { energies1, energies3, values, range1, range3 } = figure
  const inside = (value: number, range: { low: number; high: number } | undefined) =>
    !range || (value >= range.low && value <= range.high)
  const columns: [number[], number[], number[]] = [[], [], []]
  energies1.forEach((energy1, i) => {
    if (!inside(energy1, range1)) return
    energies3.forEach((energy3, j) => {
      if (!inside(energy3, range3)) return
      columns[0].push(energy1)
      columns[1].push(energy3)
      columns[2].push(values[i * energies3.length + j] as number)
    })
  })
  return toCsv([
    { name: figure.xLabel, values: columns[0] },
    { name: figure.yLabel, values: columns[1] },
    { name: figure.valueLabel ?? 'value', values: columns[2] },
  ])
}
