import { BathTermSchema, type BathTerm } from '#shared/schemas/parameter-set'
import type { DraftSet } from './draft'
import { schemaFields, type SchemaField } from './schema-fields'

/** What the table must know about a kind of bath term beyond its schema. */
interface BathKind {
  name: string
  /** Spectral density as printed under the term's head. */
  formula: string
  /** A legal start for a new term. */
  start: DraftSet
  /** Values with a meaning of their own, offered beside the field of that name. */
  presets?: Record<string, { value: number; label: string }[]>
  /** Printed words for choices and for fields that are no quantities. */
  words?: Record<string, string>
}

const kinds: Record<BathTerm['kind'], BathKind> = {
  powerLaw: {
    name: 'power law',
    formula: 'J(ω) = π a ω^p ω_c^{1−p} exp(−(ω/ω_c)^q)',
    start: {
      kind: 'powerLaw',
      couplingStrength: 0.3,
      exponent: 3,
      cutoffEnergyMeV: 1.5,
      cutoffShape: 'gaussian',
    },
    presets: {
      exponent: [
        { value: 3, label: '3 deformation potential' },
        { value: 1, label: '1 piezoelectric' },
      ],
    },
    words: {
      cutoffShape: 'cutoff shape',
      gaussian: 'Gaussian, q = 2',
      exponential: 'exponential, q = 1',
    },
  },
  overdamped: {
    name: 'overdamped (Drude-Lorentz)',
    formula: 'J(ω) = 2λ ωΓ / (ω^2 + Γ^2)',
    start: { kind: 'overdamped', reorganizationEnergyMeV: 2, relaxationEnergyMeV: 5 },
  },
  underdamped: {
    name: 'underdamped oscillator',
    formula: 'J(ω) = 2S ω_0^3 ωΓ / ((ω_0^2 − ω^2)^2 + ω^2Γ^2)',
    start: { kind: 'underdamped', huangRhys: 0.2, energyMeV: 10, dampingEnergyMeV: 1 },
  },
  logNormal: {
    name: 'log-normal sideband',
    formula: 'J(ω) = S ω (π/2)^{1/2} s^{−1} exp(−ln^2(ω/ω_0) / 2s^2)',
    start: { kind: 'logNormal', huangRhys: 0.2, energyMeV: 10, relativeWidth: 0.3 },
  },
  confinedExciton: {
    name: 'confined exciton, acoustic phonons',
    formula: 'J(ω) ∝ ω^3 [D_e exp(−ω^2 a_e^2/4v_L^2) − D_h exp(−ω^2 a_h^2/4v_L^2)]^2 + piezoelectric',
    start: {
      kind: 'confinedExciton',
      densityKgPerM3: 5317,
      longitudinalVelocityMPerS: 5088,
      transverseVelocityMPerS: 2963,
      electronShiftEV: -7,
      holeShiftEV: 3.5,
      electronLengthNm: 4,
      holeLengthNm: 3.5,
      piezoCoefficientCPerM2: 0.16,
      relativePermittivity: 12.9,
    },
  },
  tabulated: {
    name: 'table',
    formula: 'J(ω): monotone cubic through the points, ω^p below the first, 0 above the last',
    start: {
      kind: 'tabulated',
      energiesMeV: [0.5, 1, 1.5, 2, 3, 4, 5],
      densityMeV: [0.05, 0.3, 0.6, 0.7, 0.4, 0.1, 0],
      lowEnergyExponent: 3,
    },
  },
  expression: {
    name: 'formula',
    formula: 'J(ω): ħJ in meV as a formula of E = ħω in meV',
    start: { kind: 'expression', formula: '0.2 * E^3 / 4 * exp(-E / 2)' },
  },
}

const members = new Map(BathTermSchema.options.map((option) => [option.shape.kind.value as BathTerm['kind'], option]))

const isKind = (kind: unknown): kind is BathTerm['kind'] => typeof kind === 'string' && members.has(kind as never)

export const bathKindOptions = [...members.keys()].map((kind) => ({ value: kind, label: kinds[kind].name }))

export const bathKindOf = (term: unknown): BathKind | undefined => {
  const kind = (term as { kind?: unknown } | undefined)?.kind
  return isKind(kind) ? kinds[kind] : undefined
}

/** Rows of a term's table, from the schema of its kind. */
export const bathFieldsOf = (term: unknown): SchemaField[] => {
  const kind = (term as { kind?: unknown } | undefined)?.kind
  const member = isKind(kind) ? members.get(kind) : undefined
  return member ? schemaFields(member) : []
}

export const newBathTerm = (kind: BathTerm['kind']): DraftSet => structuredClone(kinds[kind].start)

/** The printed word of a field or a choice; `cutoffShape` without an entry reads "cutoff shape". */
export const wordOf = (kind: BathKind | undefined, key: string): string =>
  kind?.words?.[key] ?? key.replace(/([A-Z])/g, (letter) => ` ${letter.toLowerCase()}`)
