import type { Ref } from 'vue'

const patienceMs = 600

/** An error text that waits while someone is still typing, but leaves at once when the value is mended. */
export const useCalmError = (error: Ref<string>, typing: Ref<boolean>): Readonly<Ref<string>> => {
  const shown = ref(error.value)
  let timer: ReturnType<typeof setTimeout> | undefined
  watch([error, typing], ([text, isTyping]) => {
    clearTimeout(timer)
    if (text === '' || !isTyping || shown.value !== '') shown.value = text
    else timer = setTimeout(() => (shown.value = text), patienceMs)
  })
  onScopeDispose(() => clearTimeout(timer))
  return shown
}
