import { describe, expect, it } from 'vitest'
import { policy } from '../api/policy'
import { listRouteFiles } from '../api/support/routes'
import { filesBelow, isCode, read } from './source-tree'

const files = listRouteFiles()

describe('every route', () => {
  it('has a line in the policy table', () => {
    expect(Object.keys(policy).sort()).toEqual(files)
  })

  it.each(files)('%s has one guard, the one that its policy names', (file) => {
    const text = read(`server/api/${file}`)
    const guards = [...text.matchAll(/export default define(Group|Account|Public)Route\(/g)].map((match) => match[1])
    const access = policy[file]?.access
    const expected = access === 'public' ? 'Public' : access === 'account' ? 'Account' : 'Group'
    expect(guards).toEqual([expected])
    expect(file.startsWith('groups/[groupId]')).toBe(expected === 'Group')
    if (expected === 'Group') expect(/\baccess: '(\w+)'/.exec(text)?.[1]).toBe(access)
  })

  it.each(files)('%s is thin', (file) => {
    const lines = read(`server/api/${file}`).split('\n').length
    expect(lines).toBeLessThanOrEqual(80)
  })
})

/** Ways around the house's own doors, each with the door to use instead. */
const detours: [RegExp, string, string[]][] = [
  [/\b(get|require|replace)UserSession\b/, 'session-cookie.ts reads sessions', []],
  [
    /\bgetRequestIP\b|x-forwarded-for/i,
    'client-address.ts counts proxies from the right',
    ['server/utils/client-address.ts'],
  ],
  [/\bgetRequestURL\b|\bgetRequestHost\b/, 'the base address comes from the configuration', []],
  [
    /\breadBody\b\(event\)|\breadRawBody\b|\breadMultipartFormData\b|\breadFormData\b/,
    'read-body.ts counts what arrives',
    [],
  ],
  [
    /\bdefineCachedEventHandler\b|\bcachedEventHandler\b|\brouteRules\b/,
    'nothing private is cached or guarded by path',
    [],
  ],
  [/\.transaction\(/, 'withTransaction and withGroup cannot leak a client', []],
  [/\bsendRedirect\b/, 'no address is taken from a request', []],
]

const withoutComments = (text: string) => text.replace(/\/\*[^]*?\*\/|^\s*\/\/.*$/gm, '')

describe('the server', () => {
  it.each(detours)('does not use %s: %s', (pattern, _instead, allowed) => {
    const offenders = filesBelow('server')
      .filter(isCode)
      .filter((path) => !allowed.includes(path) && pattern.test(withoutComments(read(path))))
    expect(offenders).toEqual([])
  })

  it('asks the tables of groups by group, in every statement', () => {
    const tables = 'parameterSets|parameterSetVersions|runs|results|resultArrays|files|measurements'
    const statement = new RegExp(String.raw`\.(?:from|update|delete|insert)\((?:${tables})\)[^]*?(?=\n\n|$)`, 'g')
    const offenders = filesBelow('server/database/repositories').flatMap((path) =>
      [...read(path).matchAll(statement)]
        // A start of a statement that every caller continues with its group.
        .filter(
          (match) =>
            !read(path)
              .slice(0, match.index)
              .endsWith('const selectRuns = (tx: GroupTx) =>\n  tx\n    .select(view)\n    '),
        )
        .filter(([text]) => !/groupId|ofGroup|ofSet|versionsOfSet|ofRun|values\(/.test(text))
        .map(([text]) => `${path}: ${text.split('\n')[0]}`),
    )
    expect(offenders).toEqual([])
  })
})
