/**
 * The closed list of bath kinds. A kind is one file that turns its parameters into a `Continuum`, with closed forms where
 * it has them (Source: named in its file); its schema joins the union in shared/schemas/parameter-set.ts, and the compiler then asks for its row here.
 */
import type { BathTerm } from '../../schemas/parameter-set'
import { buildFrequencyPanels } from '../frequency-panels'
import type { ClosedForm, Continuum, DampedOscillation, DensityIntegrals } from './continuum'
import { confinedExcitonContinuum } from './confined-exciton'
import { expressionContinuum, expressionIntegrals } from './expression'
import { logNormalContinuum } from './log-normal'
import { overdampedClosedForm, overdampedContinuum, overdampedIntegrals } from './overdamped'
import { powerLawClosedForm, powerLawContinuum } from './power-law'
import { tabulatedContinuum } from './tabulated'
import {
  underdampedClosedForm,
  underdampedContinuum,
  underdampedIntegrals,
  underdampedOscillation,
} from './underdamped'

interface BathKind<Term> {
  toContinuum: (term: Term) => Continuum
  /** g0 without quadrature, where there is one for these parameters. th in rad/ps. */
  closedForm?: (term: Term, th: number) => ClosedForm | undefined
  /** The part of g0 that polynomials in time cannot hold, where there is one. */
  oscillation?: (term: Term, th: number) => DampedOscillation | undefined
  /** Closed integrals; needed where J falls too slowly for panels. */
  integrals?: (term: Term, th: number) => DensityIntegrals
}

type Kinds = { [K in BathTerm['kind']]: BathKind<Extract<BathTerm, { kind: K }>> }

const kinds: Kinds = {
  powerLaw: { toContinuum: powerLawContinuum, closedForm: powerLawClosedForm },
  overdamped: {
    toContinuum: overdampedContinuum,
    closedForm: overdampedClosedForm,
    integrals: overdampedIntegrals,
  },
  underdamped: {
    toContinuum: underdampedContinuum,
    closedForm: underdampedClosedForm,
    oscillation: underdampedOscillation,
    integrals: underdampedIntegrals,
  },
  logNormal: { toContinuum: logNormalContinuum },
  confinedExciton: { toContinuum: confinedExcitonContinuum },
  tabulated: { toContinuum: tabulatedContinuum },
  expression: { toContinuum: expressionContinuum, integrals: expressionIntegrals },
}

const kindOf = (term: BathTerm): BathKind<BathTerm> => kinds[term.kind] as BathKind<BathTerm>

export const toContinuum = (term: BathTerm): Continuum => kindOf(term).toContinuum(term)

export const closedFormOf = (term: BathTerm, th: number): ClosedForm | undefined => kindOf(term).closedForm?.(term, th)

export const oscillationOf = (term: BathTerm, th: number): DampedOscillation | undefined =>
  kindOf(term).oscillation?.(term, th)

export const densityIntegrals = (term: BathTerm, th: number): DensityIntegrals =>
  kindOf(term).integrals?.(term, th) ?? buildFrequencyPanels([toContinuum(term)], th, 0).integrals
