/**
 * Measured quantities of two-dimensional spectra.
 *
 * - Centre-line slope: on the absorptive map, the E3 of the maximum of each cut at fixed E1 (parabola through three points),
 *   followed from the highest point outward while E1 stays within the half-maximum range of the ridge; slope dE3/dE1 of the straight
 *   line through them by least squares. 1 without spectral diffusion and homogeneous width, 0 for a homogeneous line.
 *   It is not the frequency correlation function itself.
 * - Ellipticity: (D^2 - A^2)/(D^2 + A^2) of the FWHM along (D = sqrt2 x the width in E) and across (A = the width in x = E3 - E1
 *   divided by sqrt2) the diagonal of the absorptive map.
 *
 * Source: Kwak, Park, Finkelstein & Fayer, J. Chem. Phys. 127, 124503 (2007); Roberts, Loparo & Tokmakoff, J. Chem. Phys.
 * 125, 084502 (2006). Spec: tests/engine/measured.spec.ts.
 */
import type { MeasuredQuantity } from '../schemas/run'
import { isMissing, quantityOf, type Missing } from './measured'

interface Ridge {
  energy1: number
  energy3: number
  height: number
}

/** Local maximum of row i next to column `near`, climbing uphill; undefined at an edge. */
const ridgeAt = (
  values: Float64Array,
  energies: Float64Array,
  i: number,
  near: number,
): [Ridge, number] | undefined => {
  const n = energies.length
  const at = (k: number) => values[i * n + k]!
  let k = near
  while (k + 1 < n && at(k + 1) > at(k)) k++
  while (k > 0 && at(k - 1) > at(k)) k--
  if (k === 0 || k === n - 1) return undefined
  const bend = at(k - 1) - 2 * at(k) + at(k + 1)
  const shift = bend < 0 ? (0.5 * (at(k - 1) - at(k + 1))) / bend : 0
  const step = energies[1]! - energies[0]!
  return [{ energy1: energies[i]!, energy3: energies[k]! + shift * step, height: at(k) }, k]
}

/** Points of the centre line around the highest point of a real map [E1][E3] on equal, evenly spaced axes. */
export const centreLine = (values: Float64Array, energies: Float64Array): Ridge[] | Missing => {
  const n = energies.length
  let top = 0
  for (let j = 1; j < values.length; j++) if (values[j]! > values[top]!) top = j
  const row = Math.floor(top / n)
  const start = ridgeAt(values, energies, row, top % n)
  if (!start || !(start[0].height > 0)) return { reason: 'the highest point is at the edge of the map' }
  const points = [start[0]]
  for (const direction of [-1, 1]) {
    let near = start[1]
    for (let i = row + direction; i >= 0 && i < n; i += direction) {
      const next = ridgeAt(values, energies, i, near)
      if (!next || next[0].height < start[0].height / 2) break
      near = next[1]
      points.push(next[0])
    }
  }
  return points.length < 3 ? { reason: 'fewer than three cuts lie within the half-maximum range' } : points
}

export const centreLineSlope = (values: Float64Array, energies: Float64Array): MeasuredQuantity => {
  const points = centreLine(values, energies)
  const name = 'centre-line slope'
  if (isMissing(points)) return quantityOf('centreLineSlope', name, '1', null, points.reason)
  const mean = (of: (point: Ridge) => number) => points.reduce((sum, point) => sum + of(point), 0) / points.length
  const mean1 = mean((point) => point.energy1)
  const mean3 = mean((point) => point.energy3)
  const spread = mean((point) => (point.energy1 - mean1) ** 2)
  const joint = mean((point) => (point.energy1 - mean1) * (point.energy3 - mean3))
  return quantityOf('centreLineSlope', name, '1', joint / spread)
}

/** From the widths of the absorptive slices: along in E, across in x = E3 - E1. */
export const ellipticity = (along: MeasuredQuantity, across: MeasuredQuantity): MeasuredQuantity => {
  if (along.value === null || across.value === null) {
    return quantityOf('ellipticity', 'ellipticity', '1', null, along.reason ?? across.reason)
  }
  const d = 2 * along.value ** 2
  const a = across.value ** 2 / 2
  return quantityOf('ellipticity', 'ellipticity', '1', (d - a) / (d + a))
}
