import { defineNitroPlugin, useRuntimeConfig } from 'nitropack/runtime'
import { requestIdOf } from '../utils/request-context'
import { cspNonceOf, securityHeaders } from '../utils/security-headers'

/**
 * Headers go onto the answer before anything else sees the request, so that static files, errors and streams carry
 * them as well; the shell gets its nonces when it is rendered.
 */
export default defineNitroPlugin((nitro) => {
  const { baseUrl } = useRuntimeConfig()
  nitro.hooks.hook('request', (event) => {
    event.node.res.setHeader('x-request-id', requestIdOf(event))
    for (const [name, value] of securityHeaders(event, baseUrl)) event.node.res.setHeader(name, value)
  })
  nitro.hooks.hook('render:response', (response, { event }) => {
    Reflect.deleteProperty(response.headers ?? {}, 'x-powered-by')
    if (typeof response.body !== 'string') return
    const nonce = cspNonceOf(event)
    response.body = response.body.replace(/<(script|style|link)(?=[\s>])/g, `<$1 nonce="${nonce}"`)
  })
})
