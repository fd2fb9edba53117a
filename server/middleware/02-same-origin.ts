import { defineEventHandler } from 'h3'
import { useRuntimeConfig } from 'nitropack/runtime'
import { requireSameOrigin } from '../utils/same-origin'

/** Runs before every route, whatever its path is spelled like. */
export default defineEventHandler((event) => {
  if (event.method === 'GET' || event.method === 'HEAD') return
  requireSameOrigin(event.node.req.headers, useRuntimeConfig(event).baseUrl)
})
