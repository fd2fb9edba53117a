import { describe, expect, it } from 'vitest'
import { bathFieldsOf, bathKindOf, bathKindOptions, newBathTerm, wordOf } from '../../../app/utils/bath-kinds'
import { BathTermSchema } from '../../../shared/schemas/parameter-set'

describe.each(bathKindOptions)('bath term of kind $value', ({ value, label }) => {
  const term = newBathTerm(value)

  it('begins with legal values', () => expect(BathTermSchema.safeParse(term).error?.issues ?? []).toEqual([]))

  it('has a name, a formula and a row for every field of its schema', () => {
    expect(label).not.toBe('')
    expect(bathKindOf(term)?.formula).toContain('J(ω)')
    const option = BathTermSchema.options.find((each) => each.shape.kind.value === value)
    const keys = Object.keys(option?.shape ?? {}).filter((key) => key !== 'kind')
    expect(bathFieldsOf(term).map((field) => field.path[0])).toEqual(keys)
    expect(keys.length).toBeGreaterThan(0)
  })

  it('offers only presets that its schema takes', () => {
    for (const [key, presets] of Object.entries(bathKindOf(term)?.presets ?? {})) {
      for (const preset of presets)
        expect(BathTermSchema.safeParse({ ...term, [key]: preset.value }).success).toBe(true)
    }
  })
})

it('an unknown kind has no rows and no words of its own', () => {
  expect(bathFieldsOf({ kind: 'unheard' })).toEqual([])
  expect(bathKindOf({ kind: 'unheard' })).toBeUndefined()
  expect(wordOf(undefined, 'cutoffShape')).toBe('cutoff shape')
})
