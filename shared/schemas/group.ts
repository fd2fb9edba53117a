import { z } from 'zod'
import { lineOfText } from './text'

export const GroupRequestSchema = z.strictObject({ name: lineOfText('a group name') })
export type GroupRequest = z.infer<typeof GroupRequestSchema>
