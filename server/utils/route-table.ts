import { handlers } from '#nitro-internal-virtual/server-handlers'

const matches = (route: string, path: string): boolean => {
  const pattern = route.split('/')
  const parts = path.split('/')
  if (pattern.at(-1)?.startsWith('**')) {
    return (
      parts.length >= pattern.length &&
      matches(pattern.slice(0, -1).join('/'), parts.slice(0, pattern.length - 1).join('/'))
    )
  }
  return (
    pattern.length === parts.length && pattern.every((part, index) => part.startsWith(':') || part === parts[index])
  )
}

/** Methods that the built server has a file for at this path. */
export const allowedMethods = (path: string): string[] => {
  const plain = path.split('?', 1)[0]?.replace(/\/$/, '') ?? ''
  const methods = handlers
    .filter(({ route, method }) => route?.startsWith('/api/') && method && matches(route, plain))
    .map(({ method }) => method?.toUpperCase() ?? '')
  return [...new Set(methods)].sort()
}
