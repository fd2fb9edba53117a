/**
 * Evaluates requests for physical quantities, one after another: the engine's front door for scripts. Framework-free; the
 * command line only reads the file and prints the answers.
 */
import { EngineRequestSchema, type EngineQuantity, type EngineRequest, type RequestOf } from '../schemas/engine-request'
import { EngineRefusal, type Answer } from './answer'
import {
  answerKubo,
  answerLorentzian,
  answerOrientation,
  answerSphereEnergies,
  answerSpheroidal,
  answerTorsional,
  answerVoigt,
} from './elementary'
import {
  answerAbsorption,
  answerAbsorptionFwhm,
  answerFluorescence,
  answerHuangRhys,
  answerLineBroadening,
  answerLinearSampled,
  answerMoments,
  answerPathways,
  answerReorganization,
  answerSpectralDensity,
  answerZeroPhononWeight,
} from './line-shapes'
import { answerMap, answerMapSampled } from './maps'

const answers: { [Q in EngineQuantity]: (request: RequestOf<Q>) => Answer } = {
  lineBroadeningG0: answerLineBroadening,
  spectralDensity: answerSpectralDensity,
  absorption: answerAbsorption,
  fluorescence: answerFluorescence,
  absorptionFwhm: answerAbsorptionFwhm,
  linearSampled: answerLinearSampled,
  huangRhysLineWeights: answerHuangRhys,
  zeroPhononWeight: answerZeroPhononWeight,
  moments: answerMoments,
  reorganizationEnergy: answerReorganization,
  thirdOrderPathways: answerPathways,
  twoDimensionalSpectra: answerMap,
  twoDimensionalSpectraSampled: answerMapSampled,
  sphereTorsionalEigenvalues: answerTorsional,
  sphereSpheroidalEigenvalues: answerSpheroidal,
  sphereModeEnergies: answerSphereEnergies,
  isotropicOrientationalFactor: answerOrientation,
  kuboFwhm: answerKubo,
  voigtFwhm: answerVoigt,
  lorentzianFwhm: answerLorentzian,
}

export const engineQuantities = Object.keys(answers) as EngineQuantity[]

export interface RequestProblem {
  /** JSON path within the file, `$[3].parameters.bath[0].exponent`. */
  path: string
  message: string
}

export type EvaluationAnswer =
  | ({ id?: string | number; quantity: string } & Answer)
  | { id?: string | number; error: { code: string; path: string; message: string } }

type Parsed = { request: EngineRequest } | { unknownQuantity: { id?: string | number; found: string } }

const jsonPath = (root: string, path: readonly PropertyKey[]): string =>
  path.reduce<string>((text, step) => text + (typeof step === 'number' ? `[${step}]` : `.${String(step)}`), root)

/** Reads a file of requests: an array, or an object whose `cases` is one. Answers every problem found, not only the first. */
export const parseRequests = (document: unknown): { requests: Parsed[]; problems: RequestProblem[] } => {
  const inside = typeof document === 'object' && document !== null && !Array.isArray(document) && 'cases' in document
  const list: unknown = inside ? document.cases : document
  const root = inside ? '$.cases' : '$'
  if (!Array.isArray(list)) {
    const found = list === null ? 'null' : typeof list
    return {
      requests: [],
      problems: [{ path: root, message: `expected an array of requests, or an object with "cases"; found ${found}` }],
    }
  }
  const requests: Parsed[] = []
  const problems: RequestProblem[] = []
  list.forEach((entry: unknown, index) => {
    const quantity = typeof entry === 'object' && entry !== null && 'quantity' in entry ? entry.quantity : undefined
    if (typeof quantity === 'string' && !Object.hasOwn(answers, quantity)) {
      const id = (entry as { id?: unknown }).id
      const isId = typeof id === 'string' || typeof id === 'number'
      requests.push({ unknownQuantity: { ...(isId ? { id } : {}), found: quantity } })
      return
    }
    const parsed = EngineRequestSchema.safeParse(entry)
    if (parsed.success) requests.push({ request: parsed.data })
    else {
      for (const { path, message } of parsed.error.issues) {
        problems.push({ path: jsonPath(`${root}[${index}]`, path), message })
      }
    }
  })
  return { requests, problems }
}

const evaluateOne = (parsed: Parsed, index: number): EvaluationAnswer => {
  if ('unknownQuantity' in parsed) {
    const { found, ...rest } = parsed.unknownQuantity
    const message = `expected one of ${engineQuantities.join(', ')}; found ${found.slice(0, 60)}`
    return { ...rest, error: { code: 'engine/unknown-quantity', path: `$[${index}].quantity`, message } }
  }
  const { request } = parsed
  const id = request.id === undefined ? {} : { id: request.id }
  try {
    // The registry pairs each quantity with its own request type; the union cannot express that at the call.
    const answer = (answers[request.quantity] as (request: EngineRequest) => Answer)(request)
    return { ...id, quantity: request.quantity, ...answer }
  } catch (error) {
    if (error instanceof EngineRefusal) {
      return { ...id, error: { code: 'engine/refused', path: `$[${index}].${error.path}`, message: error.message } }
    }
    if (error instanceof RangeError) {
      return { ...id, error: { code: 'engine/invalid', path: `$[${index}].parameters`, message: error.message } }
    }
    throw error
  }
}

export const evaluateRequests = (requests: readonly Parsed[]): EvaluationAnswer[] => requests.map(evaluateOne)
