import { z } from 'zod'
import { limits } from '../utils/limits'
import { lineOfText } from './text'

/** Length as a person counts it: one per Unicode code point, not per UTF-16 unit. */
export const countCodePoints = (text: string): number => Array.from(text).length

export const EmailSchema = z
  .string({ error: 'expected an e-mail address as text' })
  .trim()
  .toLowerCase()
  .max(254, { error: 'expected an e-mail address of at most 254 characters' })
  .pipe(z.email({ error: 'expected an e-mail address, for instance name@institute.example' }))

/**
 * A new password: long instead of complicated. Any characters are allowed; nothing has to be mixed in and nothing
 * expires. The server also refuses the ones that everybody uses.
 */
export const NewPasswordSchema = z
  .string({ error: 'expected a password as text' })
  .max(4 * limits.passwordMax, { error: `expected at most ${limits.passwordMax} characters` })
  .superRefine((password, context) => {
    const length = countCodePoints(password.normalize('NFKC'))
    if (length < limits.passwordMin) {
      const message = `expected at least ${limits.passwordMin} characters; found ${length}`
      context.addIssue({ code: 'custom', message, input: undefined })
    }
    if (countCodePoints(password) > limits.passwordMax) {
      const message = `expected at most ${limits.passwordMax} characters; found ${countCodePoints(password)}`
      context.addIssue({ code: 'custom', message, input: undefined })
    }
  })

/** A password to be checked. Its length says nothing: short ones are simply wrong. */
export const GivenPasswordSchema = z.string({ error: 'expected a password as text' }).max(4 * limits.passwordMax)

export const RegistrationSchema = z.strictObject({
  email: EmailSchema,
  name: lineOfText('a name'),
  password: NewPasswordSchema,
})
export type Registration = z.infer<typeof RegistrationSchema>

export const SignInSchema = z.strictObject({
  email: z.string().trim().toLowerCase().max(254),
  password: GivenPasswordSchema,
})
export type SignIn = z.infer<typeof SignInSchema>

export const PasswordChangeSchema = z.strictObject({
  currentPassword: GivenPasswordSchema,
  newPassword: NewPasswordSchema,
})
export type PasswordChange = z.infer<typeof PasswordChangeSchema>
