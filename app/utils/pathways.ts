import { asDouble, complexPart, sumPart, type RunArray, type SignalPart } from './run-array'

/** The signals of a third-order spectrum as a run stores them. */
export const pathways = ['rephasing', 'nonRephasing', 'absorptive'] as const
export type Pathway = (typeof pathways)[number]

export const pathwayLabels: Record<Pathway, string> = {
  rephasing: 'rephasing',
  nonRephasing: 'non-rephasing',
  absorptive: 'absorptive',
}

/** What a part of a pathway is called: the absorptive spectrum is the real part of the sum of both pathways. */
export const pathwayLabel = (pathway: Pathway, part: SignalPart): string => {
  if (pathway !== 'absorptive') return `${pathwayLabels[pathway]}, ${part}`
  if (part === 'real') return 'absorptive'
  return part === 'imaginary' ? 'dispersive (imaginary part of the sum)' : 'magnitude of the sum'
}

export interface PathwayArrays {
  rephasing: RunArray
  nonRephasing: RunArray
  absorptive: RunArray
}

export const pathwayPart = (arrays: PathwayArrays, pathway: Pathway, part: SignalPart): Float64Array => {
  if (pathway !== 'absorptive') return complexPart(arrays[pathway].data, part)
  if (part === 'real') return asDouble(arrays.absorptive)
  return sumPart(arrays.rephasing.data, arrays.nonRephasing.data, part)
}
