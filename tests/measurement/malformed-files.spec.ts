import { describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors/app-error'
import { proposeTable } from '../../shared/measurement/propose-table'
import { malformed } from './malformed'

const refusalOf = (bytes: Uint8Array): AppError => {
  try {
    proposeTable(bytes)
  } catch (error) {
    if (error instanceof AppError) return error
    throw error
  }
  throw new Error('expected a refusal; the file was read')
}

describe('files that are no table', () => {
  it('are at least 40', () => {
    expect(malformed.length).toBeGreaterThanOrEqual(40)
  })

  it.each(malformed)('$name is refused in one clear sentence', ({ make, says }) => {
    const refusal = refusalOf(make())
    expect(refusal.code).toBe('measurement/unreadable')
    expect(refusal.status).toBe(422)
    expect(refusal.detail).toMatch(says)
    expect(refusal.detail).toMatch(/^The file.*found .*expected .*\.$/s)
    expect(refusal.detail.length).toBeLessThan(400)
    expect(refusal.detail).not.toMatch(/[\p{C}\u00a0\u200b-\u200f\u202a-\u202e]/u)
    expect(refusal.issues).toHaveLength(1)
  })

  it('leaves the prototype of objects alone', () => {
    const bytes = new TextEncoder().encode('__proto__;constructor\n1;2\n2;3\n3;4\n4;5\n')
    const { columns } = proposeTable(bytes)
    expect(columns.map(({ name }) => name)).toEqual(['__proto__', 'constructor'])
    expect(Object.keys(Object.prototype)).toEqual([])
    expect(Reflect.get({}, 'polluted')).toBeUndefined()
  })
})
