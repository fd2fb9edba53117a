import { ParameterSetSchema, type ParameterSet } from '#shared/schemas/parameter-set'
import { contentHash } from '#shared/utils/canonical'
import { limits } from '#shared/utils/limits'
import { ApiError, invalidInput } from './api-error'

export interface SetFile {
  name: string
  parameters: ParameterSet
  contentHash: string
}

const unreadable = (detail: string) => new ApiError({ status: 422, code: 'input/malformed', detail })

/** `line 3, column 7` of a position in a text. */
const placeOf = (text: string, position: number): string => {
  const before = text.slice(0, position).split('\n')
  return `line ${before.length}, column ${(before.at(-1)?.length ?? 0) + 1}`
}

const parseJson = (text: string): unknown => {
  try {
    return JSON.parse(text)
  } catch (error) {
    const message = error instanceof Error ? error.message : ''
    const position = Number(/position (\d+)/.exec(message)?.[1])
    const place = Number.isFinite(position) ? placeOf(text, position) : 'its end'
    throw unreadable(`The file is not JSON; reading stopped at ${place}. Expected an object with the fields of a set.`)
  }
}

/** Reads a downloaded set back. Whatever is wrong comes as one error, with the path of every wrong field. */
export const readSetFile = async (file: File): Promise<SetFile> => {
  if (file.size > limits.jsonBytes) {
    throw unreadable(`Expected a file of at most ${formatBytes(limits.jsonBytes)}; found ${formatBytes(file.size)}.`)
  }
  const content = parseJson((await file.text()).replace(/^\ufeff/, ''))
  const parsed = ParameterSetSchema.safeParse(content)
  if (!parsed.success) throw invalidInput(parsed.error.issues)
  const name = file.name
    .replace(/\.json$/i, '')
    .replace(/[\s_]+/g, ' ')
    .trim()
  return { name: name.slice(0, limits.nameLength), parameters: parsed.data, contentHash: contentHash(parsed.data) }
}
