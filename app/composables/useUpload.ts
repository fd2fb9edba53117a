import { limits } from '#shared/utils/limits'
import type { UploadedFile } from '~/types/measurement'

const problemOf = (request: XMLHttpRequest): ApiError => {
  const fallback = {
    status: request.status,
    code: 'service/internal',
    detail: `The server answered ${request.status} without saying why.`,
  }
  try {
    const body = JSON.parse(request.responseText) as { code?: string; detail?: string; title?: string }
    if (typeof body.code !== 'string') return new ApiError(fallback)
    return new ApiError({ ...fallback, ...body, code: body.code, detail: body.detail || body.title || fallback.detail })
  } catch {
    return new ApiError(fallback)
  }
}

/**
 * Sends one file with progress. XMLHttpRequest, because fetch tells nothing about the bytes on their way up. A new upload
 * or the end of the component aborts the one under way.
 */
export const useUpload = (groupId: () => string) => {
  const sent = ref(0)
  const total = ref(0)
  const pending = ref(false)
  const error = shallowRef<unknown>(null)
  let request: XMLHttpRequest | undefined

  const abort = () => {
    request?.abort()
    request = undefined
    pending.value = false
  }

  const send = (file: File): Promise<UploadedFile> =>
    new Promise((resolve, reject) => {
      const mine = new XMLHttpRequest()
      request = mine
      const body = new FormData()
      body.append('file', file, file.name)
      mine.open('POST', `/api/groups/${groupId()}/files`)
      mine.setRequestHeader('accept', 'application/json')
      mine.upload.onprogress = (event) => {
        sent.value = event.loaded
        if (event.lengthComputable) total.value = event.total
      }
      mine.onload = () => {
        if (mine.status === 201) resolve(JSON.parse(mine.responseText) as UploadedFile)
        else reject(problemOf(mine))
      }
      // A refusal while the body is still on its way closes the connection; the browser then reports no answer.
      mine.onerror = () =>
        reject(
          new ApiError({
            status: 0,
            code: 'network/unreachable',
            detail: 'The connection broke off during the upload. Check it and try again.',
          }),
        )
      mine.onabort = () => reject(new DOMException('aborted', 'AbortError'))
      mine.send(body)
    })

  const upload = async (file: File): Promise<UploadedFile | undefined> => {
    abort()
    error.value = null
    sent.value = 0
    total.value = file.size
    if (file.size > limits.uploadBytes) {
      const detail = `A file may have at most ${limits.uploadBytes} bytes (64 MiB); ${file.name} has ${file.size}.`
      error.value = new ApiError({ status: 413, code: 'input/too-large', detail })
      return undefined
    }
    pending.value = true
    try {
      return await send(file)
    } catch (failure) {
      if (failure instanceof DOMException && failure.name === 'AbortError') return undefined
      error.value = failure
      if (failure instanceof ApiError && failure.code === 'session/required') await useSessionStore().onSessionLost()
      return undefined
    } finally {
      pending.value = false
    }
  }

  onScopeDispose(abort)
  const fraction = computed(() => (total.value > 0 ? Math.min(1, sent.value / total.value) : 0))
  return { upload, abort, pending: readonly(pending), error, fraction, sent: readonly(sent), total: readonly(total) }
}
