import type { H3Event } from 'h3'
import { setResponseHeader, setResponseStatus } from 'h3'

/** JSON has no NaN and no infinity: JSON.stringify would write null, and the reader would lose the reason. */
export const assertFiniteNumbers = (value: unknown, path = 'answer'): void => {
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new RangeError(`${path}: expected a finite number; found ${value}`)
    return
  }
  if (typeof value !== 'object' || value === null) return
  if (Array.isArray(value)) {
    for (let index = 0; index < value.length; index++) {
      const item: unknown = value[index]
      if (typeof item === 'number' ? !Number.isFinite(item) : typeof item === 'object') {
        assertFiniteNumbers(item, `${path}[${index}]`)
      }
    }
    return
  }
  for (const [key, item] of Object.entries(value)) assertFiniteNumbers(item, `${path}.${key}`)
}

export const toAnswerJson = (value: unknown): string => {
  assertFiniteNumbers(value)
  return JSON.stringify(value)
}

/** Sends a plain value as JSON, nothing as 204; what a handler has sent itself is left alone. */
export const sendAnswer = (event: H3Event, answer: unknown, status = 200): unknown => {
  if (event.handled || event.node.res.headersSent) return answer
  if (answer === undefined || answer === null) {
    setResponseStatus(event, 204)
    return null
  }
  setResponseStatus(event, status)
  // Anything that already has its own content type (arrays, files, streams) is bytes, not an object to shape.
  if (event.node.res.hasHeader('content-type')) return answer
  setResponseHeader(event, 'content-type', 'application/json')
  return toAnswerJson(answer)
}
