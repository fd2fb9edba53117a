import { z } from 'zod'
import { limits } from '../utils/limits'
import { ParameterSetSchema } from './parameter-set'
import { lineOfText } from './text'

const note = z
  .string({ error: 'expected a note as text' })
  .trim()
  .max(limits.noteLength, {
    error: `expected a note of at most ${limits.noteLength} characters`,
  })

/** Body of a new set: its first version. */
export const SetRequestSchema = z.strictObject({
  name: lineOfText('a name'),
  parameters: ParameterSetSchema,
  note: note.default(''),
})
export type SetRequest = z.infer<typeof SetRequestSchema>

/** Body of the next version; `basedOn` is the version that was edited, so that nobody overwrites unseen work. */
export const SetVersionRequestSchema = z.strictObject({
  parameters: ParameterSetSchema,
  note: note.default(''),
  basedOn: z.int({ error: 'expected the number of the version that was edited' }).min(1),
})
export type SetVersionRequest = z.infer<typeof SetVersionRequestSchema>

export const SetRenameSchema = z.strictObject({ name: lineOfText('a name') })
export type SetRename = z.infer<typeof SetRenameSchema>

/** Path of one version. */
export const VersionParamsSchema = z.strictObject({
  setId: z.uuid(),
  version: z
    .string()
    .regex(/^[1-9]\d{0,8}$/)
    .transform(Number),
})
