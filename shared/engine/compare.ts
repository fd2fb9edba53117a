/**
 * A simulated curve laid over a measured one: scale and offset by weighted linear least squares.
 *
 *   minimise sum_i [(m_i - scale s(E_i) - offset)/u_i]^2
 *
 * | symbol | variable | unit | shape |
 * | --- | --- | --- | --- |
 * | E_i, m_i, u_i | measured.energiesMeV, values, uncertainties | meV, any, as values | [points] |
 * | s | simulated.energiesMeV, values | meV, any | any ascending axis |
 *
 * s is interpolated with a monotone cubic (Fritsch & Carlson, SIAM J. Numer. Anal. 17, 238 (1980)), which overshoots nowhere;
 * measured points outside its range take no part. The two columns are scaled to unit length and solved by one Householder
 * orthogonalisation (Golub & Van Loan, Matrix Computations, 5.3), never by normal equations. Without uncertainties every
 * u_i is 1, chi-square is the sum of squared residuals, and the standard errors are scaled by the residuals.
 * Spec: tests/engine/compare.spec.ts.
 */
import { interpolateMonotone } from './interpolate'

export interface MeasuredCurve {
  energiesMeV: Float64Array
  values: Float64Array
  /** One standard deviation each; absent: unknown. */
  uncertainties?: Float64Array | null
}

export interface SimulatedCurve {
  energiesMeV: Float64Array
  values: Float64Array
}

export interface FitOptions {
  /** Held at this value instead of fitted. */
  scale?: number
  offset?: number
  /** Only points in this range take part. */
  rangeMeV?: readonly [number, number]
}

export interface FittedNumber {
  value: number
  /** null when the number was held, or nothing is known about it. */
  standardError: number | null
}

export interface ScaleOffsetFit {
  ok: true
  scale: FittedNumber
  offset: FittedNumber
  /** Of the points that took part, in ascending energy. */
  energiesMeV: Float64Array
  /** scale s + offset. */
  simulated: Float64Array
  /** (m - simulated)/u; in units of the values when there are no uncertainties. */
  residuals: Float64Array
  chiSquare: number
  /** Chi-square per degree of freedom; null when none is left. */
  reducedChiSquare: number | null
  points: number
  /** Measured points that took no part: outside the range, outside the simulation. */
  leftOut: number
}

export interface FitFailure {
  ok: false
  code: 'too-few-points' | 'no-overlap' | 'zero-variance' | 'invalid-uncertainty' | 'not-finite'
  message: string
}

const failure = (code: FitFailure['code'], message: string): FitFailure => ({ ok: false, code, message })

interface Row {
  energy: number
  value: number
  simulated: number
  weight: number
}

const rowsOf = (measured: MeasuredCurve, simulated: SimulatedCurve, options: FitOptions): Row[] | FitFailure => {
  const { energiesMeV, values, uncertainties } = measured
  const first = Math.max(simulated.energiesMeV[0] ?? Infinity, options.rangeMeV?.[0] ?? -Infinity)
  const last = Math.min(simulated.energiesMeV.at(-1) ?? -Infinity, options.rangeMeV?.[1] ?? Infinity)
  const at = interpolateMonotone(simulated.energiesMeV, simulated.values)
  const rows: Row[] = []
  for (let i = 0; i < energiesMeV.length; i++) {
    const energy = energiesMeV[i]!
    if (!(energy >= first && energy <= last)) continue
    const uncertainty = uncertainties ? uncertainties[i]! : 1
    if (!(uncertainty > 0)) {
      return failure(
        'invalid-uncertainty',
        `point ${i} at ${energy} meV: expected an uncertainty above 0; found ${uncertainty}`,
      )
    }
    const row = { energy, value: values[i]!, simulated: at(energy), weight: 1 / uncertainty }
    if (![row.value, row.simulated, row.weight].every(Number.isFinite)) {
      return failure(
        'not-finite',
        `point ${i} at ${energy} meV: expected finite numbers; found ${row.value} beside ${row.simulated}`,
      )
    }
    rows.push(row)
  }
  return rows.sort((a, b) => a.energy - b.energy)
}

/** Solution and inverse of R for one or two columns, by Householder reflections; undefined when a column depends on the other. */
const solve = (
  columns: Float64Array[],
  target: Float64Array,
): { solution: number[]; variances: number[] } | undefined => {
  const work = columns.map((column) => Float64Array.from(column))
  const norms = work.map((column) => Math.hypot(...chunked(column)))
  if (norms.some((norm) => !(norm > 0))) return undefined
  work.forEach((column, j) => column.forEach((value, i) => (column[i] = value / norms[j]!)))
  const right = Float64Array.from(target)
  const n = target.length
  const r: number[][] = []
  for (let j = 0; j < work.length; j++) {
    const column = work[j]!
    const length = Math.hypot(...chunked(column.subarray(j)))
    if (length < 1e-9) return undefined
    const alpha = column[j]! > 0 ? -length : length
    const v = column.slice()
    v.fill(0, 0, j)
    v[j]! -= alpha
    const norm = v.reduce((total, value) => total + value * value, 0)
    for (const vector of [...work.slice(j), right]) {
      let dot = 0
      for (let i = j; i < n; i++) dot += v[i]! * vector[i]!
      const factor = (2 * dot) / norm
      for (let i = j; i < n; i++) vector[i]! -= factor * v[i]!
    }
    r.push(work.slice(j).map((vector) => vector[j]!))
  }
  if (columns.length === 1) {
    const [[r00]] = r as [[number]]
    return { solution: [right[0]! / r00 / norms[0]!], variances: [1 / (r00 * norms[0]!) ** 2] }
  }
  const [[r00, r01], [r11]] = r as [[number, number], [number]]
  const second = right[1]! / r11
  const first = (right[0]! - r01 * second) / r00
  // Covariance (R^T R)^-1 = R^-1 R^-T.
  const firstVariance = (1 + (r01 / r11) ** 2) / (r00 * r00)
  return {
    solution: [first / norms[0]!, second / norms[1]!],
    variances: [firstVariance / norms[0]! ** 2, 1 / (r11 * r11) / norms[1]! ** 2],
  }
}

/** Euclidean length of long columns in pieces, because a call takes only so many arguments. */
const chunked = (values: Float64Array): number[] => {
  const lengths: number[] = []
  for (let i = 0; i < values.length; i += 1024) lengths.push(Math.hypot(...values.subarray(i, i + 1024)))
  return lengths
}

export const fitScaleOffset = (
  measured: MeasuredCurve,
  simulated: SimulatedCurve,
  options: FitOptions = {},
): ScaleOffsetFit | FitFailure => {
  if (simulated.energiesMeV.length < 2) {
    return failure(
      'too-few-points',
      `expected a simulated curve of at least 2 points; found ${simulated.energiesMeV.length}`,
    )
  }
  const rows = rowsOf(measured, simulated, options)
  if (!Array.isArray(rows)) return rows
  const span = (axis: Float64Array) => (axis.length === 0 ? 'nothing' : `${axis[0]} to ${axis.at(-1)} meV`)
  if (rows.length === 0) {
    return failure(
      'no-overlap',
      `expected the measured energies (${span(measured.energiesMeV)}) and the simulated ones (${span(simulated.energiesMeV)}) to overlap${options.rangeMeV ? ` between ${options.rangeMeV.join(' and ')} meV` : ''}; found no common point`,
    )
  }
  const fitted = [options.scale === undefined, options.offset === undefined] as const
  const unknowns = Number(fitted[0]) + Number(fitted[1])
  if (rows.length < unknowns) {
    return failure('too-few-points', `expected at least ${unknowns} common points; found ${rows.length}`)
  }
  const weighted = (of: (row: Row) => number) => Float64Array.from(rows, (row) => of(row) * row.weight)
  const heldScale = options.scale ?? 0
  const heldOffset = options.offset ?? 0
  const columns = [...(fitted[0] ? [weighted((row) => row.simulated)] : []), ...(fitted[1] ? [weighted(() => 1)] : [])]
  const target = weighted((row) => row.value - heldScale * row.simulated - heldOffset)
  const solved = unknowns === 0 ? { solution: [], variances: [] } : solve(columns, target)
  if (!solved) {
    return failure(
      'zero-variance',
      'expected a simulated curve that varies over the common points; found a constant one, of which scale and offset cannot be told apart',
    )
  }
  const scale = fitted[0] ? solved.solution[0]! : heldScale
  const offset = fitted[1] ? solved.solution.at(-1)! : heldOffset
  const curve = Float64Array.from(rows, (row) => scale * row.simulated + offset)
  const residuals = Float64Array.from(rows, (row, i) => (row.value - curve[i]!) * row.weight)
  const chiSquare = residuals.reduce((total, value) => total + value * value, 0)
  const freedom = rows.length - unknowns
  const reducedChiSquare = freedom > 0 ? chiSquare / freedom : null
  // Known uncertainties give the errors by themselves; unknown ones are taken from the scatter.
  const spread = measured.uncertainties ? 1 : reducedChiSquare
  const error = (index: number): number | null =>
    spread === null ? null : Math.sqrt(solved.variances.at(index)! * spread)
  return {
    ok: true,
    scale: { value: scale, standardError: fitted[0] ? error(0) : null },
    offset: { value: offset, standardError: fitted[1] ? error(-1) : null },
    energiesMeV: Float64Array.from(rows, (row) => row.energy),
    simulated: curve,
    residuals,
    chiSquare,
    reducedChiSquare,
    points: rows.length,
    leftOut: measured.energiesMeV.length - rows.length,
  }
}
