import type { z } from 'zod'
import { ApiError, invalidInput } from '~/utils/api-error'

/** Sends a form: pending while under way, the failure as text, and its issues by field. A second call waits for none. */
export const useSubmit = <A extends unknown[], R>(action: (...input: A) => Promise<R>) => {
  const pending = ref(false)
  const error = shallowRef<unknown>(null)

  const submit = async (...input: A): Promise<R | undefined> => {
    if (pending.value) return undefined
    pending.value = true
    error.value = null
    try {
      return await action(...input)
    } catch (failure) {
      error.value = failure
      return undefined
    } finally {
      pending.value = false
    }
  }

  const issues = computed(() => (error.value instanceof ApiError ? error.value.issues : []))
  return {
    submit,
    pending: readonly(pending),
    error,
    message: computed(() => (error.value === null ? '' : messageOf(error.value))),
    issues,
    /** The complaint about one field, or an empty text. */
    issueFor: (path: string) => issueAt(issues.value, path),
    clear: () => (error.value = null),
  }
}

/** Checks a form with the server's own schema before it is sent; throws what the server would answer. */
export const validated = <S extends z.ZodType>(schema: S, input: unknown): z.output<S> => {
  const parsed = schema.safeParse(input)
  if (!parsed.success) throw invalidInput(parsed.error.issues)
  return parsed.data
}
