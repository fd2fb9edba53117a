import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { projectRoot } from '../../support/server'
import type { RoutePolicy } from '../policy'
import type { ObjectIds } from './objects'

export interface Route {
  /** Path of its file below server/api. */
  file: string
  method: string
  /** Path with `[name]` steps. */
  pattern: string
}

/** What the framework makes of a file name: `a/[b]/index.get.ts` answers GET /api/a/:b. */
export const toRoute = (file: string): Route => {
  const match = /^(.*?)(?:\/?index)?\.(get|post|put|patch|delete)\.ts$/.exec(file)
  if (!match) throw new Error(`server/api/${file}: expected name.method.ts`)
  return { file, method: (match[2] ?? '').toUpperCase(), pattern: `/api/${match[1]}` }
}

export const listRouteFiles = (): string[] =>
  readdirSync(join(projectRoot, 'server/api'), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && entry.name.endsWith('.ts'))
    .map((entry) => join(entry.parentPath, entry.name).slice(join(projectRoot, 'server/api').length + 1))
    .sort()

/** `METHOD /path/:param` of every handler in the server that was built. */
export const listBuiltRoutes = (): { route: string; method: string | undefined }[] => {
  const source = readFileSync(join(projectRoot, '.output/server/chunks/nitro/nitro.mjs'), 'utf8')
  const entry =
    /\{ route: '([^']*)', handler: \w+, lazy: (?:true|false), middleware: (true|false), method: (undefined|"\w+") \}/g
  return [...source.matchAll(entry)]
    .filter((match) => match[2] === 'false')
    .map((match) => ({
      route: match[1] ?? '',
      method: match[3] === 'undefined' ? undefined : match[3]?.replaceAll('"', '').toUpperCase(),
    }))
}

export const pathOf = (route: Route, policy: RoutePolicy, ids: ObjectIds): string =>
  route.pattern.replace(/\[(?:\.\.\.)?(\w+)\]/g, (_all, name: string) => {
    const value = policy.steps?.[name] ?? ids[name as keyof ObjectIds]
    if (value === undefined) throw new Error(`${route.file}: no value for [${name}]; name it in objects or steps`)
    return value
  })
