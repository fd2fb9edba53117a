import { describe, expect, it } from 'vitest'
import { pathwayLabel, pathwayPart } from '../../../app/utils/pathways'
import { asDouble, complexPart, sumPart, toRunArray } from '../../../app/utils/run-array'

const headers = (type: string, shape: string, unit = 'ps²') =>
  new Headers({ 'x-array-type': type, 'x-array-shape': shape, 'x-array-unit': encodeURIComponent(unit) })

describe('a stored array', () => {
  it('is read with its type, shape and unit', () => {
    const bytes = Float32Array.of(3, 4, 0, -1).buffer
    const array = toRunArray('map/0/0/rephasing', headers('complex64', '2'), bytes)
    expect(array).toMatchObject({ dataType: 'complex64', shape: [2], unit: 'ps²' })
    expect([...complexPart(array.data, 'real')]).toEqual([3, 0])
    expect([...complexPart(array.data, 'imaginary')]).toEqual([4, -1])
    expect([...complexPart(array.data, 'magnitude')]).toEqual([5, 1])
    expect(asDouble(toRunArray('x', headers('float64', '2'), Float64Array.of(1, 2).buffer))).toEqual(
      Float64Array.of(1, 2),
    )
  })

  it('is refused when bytes and shape disagree or the type is unknown', () => {
    expect(() => toRunArray('x', headers('float64', '3'), new ArrayBuffer(16))).toThrow(
      'Array x: expected 24 bytes for shape 3; found 16.',
    )
    expect(() => toRunArray('x', headers('int8', '3'), new ArrayBuffer(3))).toThrow('found "int8"')
    expect(() => toRunArray('x', new Headers(), new ArrayBuffer(3))).toThrow('expected a type of number')
  })

  it('gives the parts of a pathway; the absorptive one is the real part of the sum', () => {
    const array = (data: Float64Array) => ({ key: '', dataType: 'complex128' as const, shape: [1], unit: '', data })
    const arrays = {
      rephasing: array(Float64Array.of(1, 2)),
      nonRephasing: array(Float64Array.of(2, 2)),
      absorptive: { ...array(Float64Array.of(3)), dataType: 'float64' as const },
    }
    expect([...sumPart(arrays.rephasing.data, arrays.nonRephasing.data, 'magnitude')]).toEqual([5])
    expect([...pathwayPart(arrays, 'absorptive', 'real')]).toEqual([3])
    expect([...pathwayPart(arrays, 'absorptive', 'imaginary')]).toEqual([4])
    expect([...pathwayPart(arrays, 'nonRephasing', 'imaginary')]).toEqual([2])
    expect(pathwayLabel('absorptive', 'real')).toBe('absorptive')
    expect(pathwayLabel('nonRephasing', 'real')).toBe('non-rephasing, real')
  })
})
