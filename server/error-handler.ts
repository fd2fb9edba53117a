import type { H3Event } from 'h3'
import { defineNitroErrorHandler } from 'nitropack/runtime'
import { sendProblem } from './utils/problem'

/** Every failure of every address leaves the server here, as one kind of document. */
export default defineNitroErrorHandler((error, event) => sendProblem(event as H3Event, error))
