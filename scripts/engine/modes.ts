import { parseArgs } from 'node:util'
import type { LayeredSphere, Medium, SphereFamily } from '../../shared/engine/sphere/medium'
import { sphereModes } from '../../shared/engine/sphere/sphere-modes'
import { InputProblem } from './input-problem'

const options = {
  'radius-nm': { type: 'string' },
  longitudinal: { type: 'string' },
  transverse: { type: 'string' },
  density: { type: 'string' },
  'shell-nm': { type: 'string' },
  shell: { type: 'string' },
  matrix: { type: 'string' },
  count: { type: 'string', default: '4' },
  'highest-l': { type: 'string', default: '3' },
} as const

type Given = Partial<Record<keyof typeof options, string>>

const fail = (option: string, message: string): never => {
  throw new InputProblem([{ path: `--${option}`, message }])
}

const numberOf = (given: Given, option: keyof typeof options, unit: string): number => {
  const text = given[option]
  if (text === undefined) return fail(option, `expected a number of ${unit}; found nothing`)
  const value = Number(text)
  if (text.trim() === '' || !Number.isFinite(value)) fail(option, `expected a number of ${unit}; found "${text}"`)
  return value
}

const wholeOf = (given: Given, option: 'count' | 'highest-l', highest: number): number => {
  const value = numberOf(given, option, 'modes')
  if (!Number.isInteger(value) || value < 1 || value > highest) {
    fail(option, `expected a whole number, 1 to ${highest}; found ${given[option]}`)
  }
  return value
}

const mediumOf = (given: Given, option: 'shell' | 'matrix'): Medium => {
  const parts = (given[option] ?? '').split(',').map(Number)
  if (parts.length !== 3 || parts.some((value) => !Number.isFinite(value))) {
    fail(
      option,
      `expected density (kg/m3), longitudinal and transverse velocity (m/s) with commas; found "${given[option]}"`,
    )
  }
  const [densityKgPerM3, longitudinalVelocityMPerS, transverseVelocityMPerS] = parts as [number, number, number]
  return { densityKgPerM3, longitudinalVelocityMPerS, transverseVelocityMPerS }
}

const parse = (args: string[]): Given => {
  try {
    return parseArgs({ args, options, strict: true }).values
  } catch (error) {
    throw new InputProblem([{ path: 'modes', message: error instanceof Error ? error.message : String(error) }])
  }
}

/** `modes ...`: torsional and spheroidal vibrations up to an angular order. */
export const sphereCommand = (args: string[]): unknown => {
  const given = parse(args)
  const layered = given['shell-nm'] !== undefined || given.matrix !== undefined
  const sphere: LayeredSphere = {
    radiusNm: numberOf(given, 'radius-nm', 'nm'),
    core: {
      // A free homogeneous sphere does not ask for its density; with a shell or a matrix the ratio counts.
      densityKgPerM3: layered || given.density !== undefined ? numberOf(given, 'density', 'kg/m3') : 1000,
      longitudinalVelocityMPerS: numberOf(given, 'longitudinal', 'm/s'),
      transverseVelocityMPerS: numberOf(given, 'transverse', 'm/s'),
    },
    ...(given['shell-nm'] === undefined
      ? {}
      : { shell: { ...mediumOf(given, 'shell'), thicknessNm: numberOf(given, 'shell-nm', 'nm') } }),
    ...(given.matrix === undefined ? {} : { matrix: mediumOf(given, 'matrix') }),
  }
  const count = wholeOf(given, 'count', 40)
  const highest = wholeOf(given, 'highest-l', 20)
  const families: [SphereFamily, number][] = [
    ['spheroidal', 0],
    ['torsional', 1],
  ]
  try {
    const modes = families.flatMap(([family, lowest]) =>
      Array.from({ length: highest - lowest + 1 }, (_, i) => sphereModes(sphere, family, lowest + i, count)).flat(),
    )
    return { sphere, modes: modes.sort((a, b) => a.energyMeV - b.energyMeV) }
  } catch (error) {
    if (error instanceof RangeError) throw new InputProblem([{ path: 'modes', message: error.message }])
    throw error
  }
}
