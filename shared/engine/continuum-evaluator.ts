/**
 * All continuous bath terms as one function of time: closed forms where a kind has one, all other terms together on one
 * set of Legendre panels in frequency. A closed form may start at a time after 0; before it the term is on panels too.
 * Source: the files of the kinds, and `frequency-panels.ts`. Spec: tests/engine/line-broadening.spec.ts.
 */
import type { BathTerm } from '../schemas/parameter-set'
import type { DampedOscillation, PointBroadening } from './bath/continuum'
import { closedFormOf, oscillationOf, toContinuum } from './bath/registry'
import { buildFrequencyPanels } from './frequency-panels'

/** The closed forms agree with quadrature to this (tests/engine: power-law, overdamped, underdamped). */
const CLOSED_FORM_ERROR = 1e-13

export interface ContinuumEvaluator {
  evaluate: PointBroadening
  /** Parts of `evaluate` that no polynomial in time can hold for long. */
  oscillations: DampedOscillation[]
  errorEstimate: number
  method: string
  /** Time on which g0 first varies, ps. */
  firstTime: number
}

/** undefined when no term has any strength. th = k_B T / hbar in rad/ps; longest time in ps. */
export const continuumEvaluator = (
  bath: readonly BathTerm[],
  th: number,
  longest: number,
): ContinuumEvaluator | undefined => {
  const terms = bath
    .map((term) => ({
      continuum: toContinuum(term),
      closedForm: closedFormOf(term, th),
      oscillation: oscillationOf(term, th),
    }))
    .filter(({ continuum }) => !continuum.silent)
  if (terms.length === 0) return undefined
  const closed = terms.flatMap(({ closedForm }) => closedForm ?? [])
  const open = terms.filter(({ closedForm }) => !closedForm).map(({ continuum }) => continuum)
  const late = terms.filter(({ closedForm }) => closedForm && closedForm.from > 0)
  const panels = open.length > 0 ? buildFrequencyPanels(open, th, longest) : undefined
  const before = late.map(({ continuum, closedForm }) => buildFrequencyPanels([continuum], th, closedForm!.from))
  const all = [...(panels ? [panels] : []), ...before]
  return {
    evaluate: (time, out) => {
      for (const { addAt, from } of closed) if (time >= from) addAt(time, out)
      late.forEach(({ closedForm }, index) => {
        if (time < closedForm!.from) before[index]!.addAt(time, out)
      })
      panels?.addAt(time, out)
    },
    oscillations: terms.flatMap(({ oscillation }) => oscillation ?? []),
    errorEstimate: all.reduce((worst, { errorEstimate }) => Math.max(worst, errorEstimate), CLOSED_FORM_ERROR),
    method: [
      ...(closed.length > 0 ? ['closed form'] : []),
      ...(all.length > 0 ? ['Legendre panels in frequency'] : []),
    ].join(', '),
    firstTime: terms.reduce((least, { continuum }) => Math.min(least, continuum.firstTime), Infinity),
  }
}
