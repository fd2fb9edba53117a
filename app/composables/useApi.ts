import { ApiError } from '~/utils/api-error'

type Query = Record<string, string | number | undefined>
export interface RequestOptions {
  query?: Query
  signal?: AbortSignal
}

const toUrl = (path: string, query: Query = {}): string => {
  const entries = Object.entries(query).filter((entry): entry is [string, string | number] => entry[1] !== undefined)
  const search = new URLSearchParams(entries.map(([key, value]) => [key, String(value)])).toString()
  return `/api${path}${search ? `?${search}` : ''}`
}

/** Turns any answer that is not a success into an ApiError, whatever its body. */
const toApiError = async (response: Response): Promise<ApiError> => {
  const fallback = {
    status: response.status,
    code: 'service/internal',
    detail: `The server answered ${response.status} without saying why.`,
  }
  const body: unknown = await response.json().catch(() => null)
  if (typeof body !== 'object' || body === null || !('code' in body)) return new ApiError(fallback)
  const problem = body as { code: string; detail?: string; title?: string; issues?: []; requestId?: string }
  return new ApiError({ ...fallback, ...problem, detail: problem.detail || problem.title || fallback.detail })
}

const send = async (method: string, path: string, body: unknown, options: RequestOptions = {}): Promise<Response> => {
  let response: Response
  try {
    response = await fetch(toUrl(path, options.query), {
      method,
      credentials: 'same-origin',
      redirect: 'error',
      headers: {
        accept: 'application/json',
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
      },
      body: body === undefined ? undefined : JSON.stringify(body),
      signal: options.signal,
    })
  } catch (cause) {
    if (options.signal?.aborted) throw cause
    const detail = 'The server could not be reached. Check the connection and try again.'
    throw new ApiError({ status: 0, code: 'network/unreachable', detail }, { cause })
  }
  if (response.ok) return response
  const error = await toApiError(response)
  // The session ended elsewhere: forget who was signed in; the route middleware then asks again.
  if (error.code === 'session/required') await useSessionStore().onSessionLost()
  throw error
}

const json = async <T>(answer: Promise<Response>): Promise<T> => {
  const text = await (await answer).text()
  return (text === '' ? undefined : JSON.parse(text)) as T
}

/** The one way to speak to the server: JSON in, JSON out, every failure an ApiError with its issues by path. */
export const useApi = () => ({
  get: <T>(path: string, options?: RequestOptions) => json<T>(send('GET', path, undefined, options)),
  post: <T>(path: string, body: unknown = {}, options?: RequestOptions) => json<T>(send('POST', path, body, options)),
  put: <T>(path: string, body: unknown, options?: RequestOptions) => json<T>(send('PUT', path, body, options)),
  patch: <T>(path: string, body: unknown, options?: RequestOptions) => json<T>(send('PATCH', path, body, options)),
  remove: <T = undefined>(path: string, options?: RequestOptions) => json<T>(send('DELETE', path, undefined, options)),
  /** Raw answer for arrays and files. */
  raw: (path: string, options?: RequestOptions) => send('GET', path, undefined, options),
})
