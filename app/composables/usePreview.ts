import type { Preview } from '#shared/engine/preview'
import type { RunEstimate } from '#shared/engine/run'
import { createPreviewQueue, type PreviewInput } from '~/utils/preview-queue'

/** The curves of the set in hand, recomputed in a worker of this browser at every change. No request goes out. */
export const usePreview = (input: () => PreviewInput | null) => {
  const preview = shallowRef<Preview | null>(null)
  const estimate = shallowRef<RunEstimate | null>(null)
  /** What the shown preview was computed from. */
  const shownInput = shallowRef<PreviewInput | null>(null)
  const elapsedMs = ref(0)
  const message = ref('')
  const pending = ref(false)

  const queue = createPreviewQueue(
    () => new Worker(new URL('../workers/preview.worker.ts', import.meta.url), { type: 'module' }),
    (answer, from) => {
      pending.value = false
      message.value = answer.ok ? '' : answer.message
      if (!answer.ok) return
      preview.value = answer.preview
      elapsedMs.value = answer.elapsedMs
      estimate.value = answer.estimate
      shownInput.value = from ?? null
    },
  )
  watch(
    input,
    (next) => {
      if (!next) return
      pending.value = true
      queue.request(next)
    },
    { immediate: true },
  )
  onScopeDispose(queue.stop)
  return { preview, estimate, elapsedMs, message, pending, shownInput }
}
