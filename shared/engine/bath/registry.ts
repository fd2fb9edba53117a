/**
 * The closed list of bath kinds. A kind is one file that turns its parameters into a `Continuum`; its schema joins the
 * union in shared/schemas/parameter-set.ts, and the compiler then asks for its row here.
 */
import type { BathTerm } from '../../schemas/parameter-set'
import type { Continuum } from './continuum'
import { powerLawContinuum } from './power-law'

type ContinuumOf = { [K in BathTerm['kind']]: (term: Extract<BathTerm, { kind: K }>) => Continuum }

const kinds: ContinuumOf = {
  powerLaw: powerLawContinuum,
}

export const toContinuum = (term: BathTerm): Continuum => kinds[term.kind](term)
