import { describe, expect, it } from 'vitest'
import { newDraft, toDraft, valueAt, withoutRow, withValue } from '../../../app/utils/draft'
import { ParameterSetSchema } from '../../../shared/schemas/parameter-set'

describe('a draft', () => {
  it('a new one is a legal set', () => expect(ParameterSetSchema.safeParse(newDraft()).success).toBe(true))

  it('comes back from a set with equal values that can be changed without touching the set', () => {
    const set = ParameterSetSchema.parse(newDraft())
    const draft = toDraft(set)
    expect(draft).toEqual(set)
    expect(draft.bath).not.toBe(set.bath)
  })

  it('a change copies what lies on its path and shares the rest', () => {
    const before = newDraft()
    const after = withValue(before, ['bath', 0, 'exponent'], 1)
    expect(valueAt(after, ['bath', 0, 'exponent'])).toBe(1)
    expect(valueAt(before, ['bath', 0, 'exponent'])).toBe(3)
    expect(after.temperaturesK).toBe(before.temperaturesK)
    expect(Object.keys(after)).toEqual(Object.keys(before))
  })

  it('makes missing parents, removes keys with undefined, and cuts rows', () => {
    expect(withValue({}, ['laser', 'fwhmMeV'], 5)).toEqual({ laser: { fwhmMeV: 5 } })
    expect(withValue({ a: 1, b: 2 }, ['a'], undefined)).toEqual({ b: 2 })
    expect(withoutRow({ modes: [{ label: 'x' }, { label: 'y' }] }, ['modes'], 0)).toEqual({ modes: [{ label: 'y' }] })
    expect(valueAt({}, ['bath', 3, 'kind'])).toBeUndefined()
  })
})
