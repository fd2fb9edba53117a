import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors/app-error'
import { proposeTable } from '../../shared/measurement/propose-table'
import { readTable } from '../../shared/measurement/read-table'
import { TableReadingSchema, type ReadingQuestion, type TableReading } from '../../shared/schemas/measurement'

/**
 * Files written by other software (see fixtures/generate.py) in the notations that laboratories meet. The rule: right,
 * or asked, or refused; never wrong in silence.
 */

interface Case {
  file: string
  refused?: true
  unanswerable?: true
  energiesMeV?: number[]
  values?: number[]
  uncertainties?: number[]
  truth?: Partial<TableReading>
}

const folder = new URL('./fixtures/', import.meta.url)
const { cases } = JSON.parse(readFileSync(new URL('expected.json', folder), 'utf8')) as { cases: Case[] }
const bytesOf = ({ file }: Case) => readFileSync(new URL(`delimited/${file}`, folder))

/** Files that say everything a reader needs, so that a question about them would be a nuisance. */
const clear = cases.filter(({ file }) =>
  /^(?:savetxt-(?!no-header)|csv-(?!no-header|two|temp|three|gaps)|locale-)/.test(file),
)

/** What a person who knows the file would choose. */
const choose = (question: ReadingQuestion, truth: Partial<TableReading>) =>
  question.choices.find(({ change }) =>
    Object.entries(change).every(([key, value]) => {
      const known = truth[key as keyof TableReading]
      return known === undefined || known === value
    }),
  )

const expectClose = (found: Float64Array | null, expected: number[] | undefined) => {
  if (expected === undefined) return expect(found).toBeNull()
  expect(found).toHaveLength(expected.length)
  expected.forEach((value, index) => {
    const error = Math.abs((found?.[index] ?? NaN) - value)
    expect(error, `index ${index}`).toBeLessThanOrEqual(4e-15 * Math.abs(value))
  })
}

const refusalOf = (action: () => unknown): AppError => {
  try {
    action()
  } catch (error) {
    if (error instanceof AppError) return error
    throw error
  }
  throw new Error('expected a refusal')
}

describe('delimited files of other software', () => {
  it('are at least 60', () => {
    expect(cases.length).toBeGreaterThanOrEqual(60)
  })

  it.each(cases.filter((entry) => entry.refused))('$file is refused with a place', (entry) => {
    const refusal = refusalOf(() => {
      const proposal = proposeTable(bytesOf(entry))
      expect(proposal.needsAnswer).toEqual([])
      return proposal
    })
    expect(refusal.code).toBe('measurement/unreadable')
    expect(refusal.detail).toMatch(/line \d+/)
  })

  it.each(cases.filter((entry) => entry.unanswerable))('$file is asked about, and cannot be read as it is', (entry) => {
    const { needsAnswer } = proposeTable(bytesOf(entry))
    const question = needsAnswer.find(({ field }) => field === 'delimiter')
    expect(question?.message).toMatch(/save the file with semicolons or tabs/)
  })

  it.each(cases.filter((entry) => entry.truth !== undefined && !entry.unanswerable))(
    '$file is right, or asked',
    (entry) => {
      const truth = entry.truth ?? {}
      const proposal = proposeTable(bytesOf(entry))
      let reading = proposal.reading
      for (const question of proposal.needsAnswer) {
        const choice = choose(question, truth)
        expect(choice, question.message).toBeDefined()
        reading = { ...reading, ...choice?.change }
      }
      const spectrum = readTable(bytesOf(entry), reading)
      expectClose(spectrum.energiesMeV, entry.energiesMeV)
      expectClose(spectrum.values, entry.values)
      expectClose(spectrum.uncertainties, entry.uncertainties)
      // What the file states must not be asked again.
      for (const key of ['axisUnit', 'decimalMark', 'groupMark'] as const) {
        const stated = truth[key]
        if (
          stated !== undefined &&
          !proposal.needsAnswer.some((question) => question.choices.some(({ change }) => key in change))
        )
          expect(reading[key]).toBe(stated)
      }
    },
  )

  it.each(cases.filter((entry) => !entry.refused))('$file gets choices that all are valid readings', (entry) => {
    const { reading, needsAnswer } = proposeTable(bytesOf(entry))
    for (const { choices } of needsAnswer)
      for (const { label, change } of choices)
        expect(TableReadingSchema.safeParse({ ...reading, ...change }).error?.issues ?? [], label).toEqual([])
  })

  it.each(clear.filter((entry) => !entry.refused && !entry.unanswerable))('$file needs no question', (entry) => {
    const questions = proposeTable(bytesOf(entry)).needsAnswer.map(({ field }) => field)
    const allowed = /whole|three-digits|blanks/.test(entry.file)
      ? ['decimalMark', 'axisUnit', 'valueColumn', 'applyJacobian']
      : []
    expect(questions.filter((field) => !allowed.includes(field))).toEqual([])
  })
})
