import { z } from 'zod'
import { limits } from '../utils/limits'

// Control characters, line and paragraph separators, and the marks that reverse the direction of what follows.
// eslint-disable-next-line no-control-regex
const unprintable = /[\u0000-\u001f\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff]/

/** One printable line, trimmed, 1 to 200 characters: names that appear in lists, headers and file names. */
export const lineOfText = (what: string, max: number = limits.nameLength) =>
  z
    .string({ error: `expected ${what} as text` })
    .trim()
    .min(1, { error: `expected ${what}; found an empty text` })
    .max(max, { error: `expected ${what} of at most ${max} characters` })
    .refine((text) => !unprintable.test(text), {
      error: `expected ${what} in one line without control characters; found one`,
    })
