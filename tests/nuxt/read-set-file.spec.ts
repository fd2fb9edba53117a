import { describe, expect, it } from 'vitest'
import { ParameterSetSchema } from '#shared/schemas/parameter-set'
import { contentHash, toJsonFile } from '#shared/utils/canonical'
import { ApiError } from '~/utils/api-error'
import { newDraft } from '~/utils/draft'
import { readSetFile } from '~/utils/read-set-file'

const file = (text: string, name = 'Heron_dots v2.json') => new File([text], name, { type: 'application/json' })
const refusal = async (text: string): Promise<ApiError> => {
  try {
    await readSetFile(file(text))
  } catch (error) {
    if (error instanceof ApiError) return error
    throw error
  }
  throw new Error('the file was taken')
}

describe('a set from a file', () => {
  const set = ParameterSetSchema.parse(newDraft())

  it('comes back with the same hash and downloads to the same bytes', async () => {
    const text = toJsonFile(set)
    const read = await readSetFile(file(text))
    expect(read.contentHash).toBe(contentHash(set))
    expect(toJsonFile(read.parameters)).toBe(text)
    expect(read.name).toBe('Heron dots v2')
  })

  it('does not mind a byte order mark, key order or spacing', async () => {
    const shuffled = JSON.stringify(Object.fromEntries(Object.entries(set).reverse()))
    expect((await readSetFile(file(`\ufeff  ${shuffled}`))).contentHash).toBe(contentHash(set))
  })

  it('names the place where reading stopped', async () => {
    const error = await refusal('{\n  "zeroPhononEnergyMeV": 2000,\n  oops\n}')
    expect(error.code).toBe('input/malformed')
    expect(error.detail).toMatch(/not JSON; reading stopped at line 3, column \d+/)
  })

  it('names every wrong field by its path', async () => {
    const bad = { ...set, bath: [{ ...set.bath[0], exponent: 9 }], temperaturesK: [4, 'warm'], surprise: 1 }
    const { issues } = await refusal(JSON.stringify(bad))
    const byPath = Object.fromEntries(issues.map(({ path, message }) => [path.join('.'), message]))
    expect(byPath['bath.0.exponent']).toContain('found 9')
    expect(byPath['temperaturesK.1']).toContain('found the text "warm"')
    expect(byPath['']).toContain('surprise')
  })

  it.each(['[]', 'null', '"set"', '12', '{"__proto__": {"zeroPhononEnergyMeV": 1}}'])('refuses %s', async (text) => {
    expect((await refusal(text)).code).toBe('input/invalid')
    expect(({} as Record<string, unknown>).zeroPhononEnergyMeV).toBeUndefined()
  })

  it('refuses a file beyond the size of a request before reading it', async () => {
    expect((await refusal(`"${'x'.repeat(1024 * 1024)}"`)).detail).toContain('at most 1.05 MB')
  })
})
