/**
 * Where to go after signing in. Only a path of this site's own pages passes; anything else (another host, a scheme,
 * backslashes, control signs, encoded slashes) falls back to the start page.
 */
const pages = /^\/(?:account|conventions|groups(?:\/[A-Za-z0-9-]+)*)?(?:\?[A-Za-z0-9=&_.-]*)?$/

export const toLocalPath = (next: unknown): string =>
  typeof next === 'string' && next.length <= 500 && pages.test(next) ? next : '/'
