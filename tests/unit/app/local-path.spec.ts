import { describe, expect, it } from 'vitest'
import { toLocalPath } from '../../../app/utils/local-path'

describe('where sign-in may lead', () => {
  it.each([
    '/',
    '/account',
    '/groups',
    '/groups/3f435fb4-0aa6-4be5-9914-11bf6a60257b/sets/new',
    '/groups/3f435fb4-0aa6-4be5-9914-11bf6a60257b/sets/9?version=2&against=1',
  ])('%s is a page of ours', (path) => expect(toLocalPath(path)).toBe(path))

  it.each([
    '//evil.example',
    '/\\evil.example',
    '\\\\evil.example',
    'https://evil.example',
    'https:evil.example',
    'javascript:alert(1)',
    'JAVASCRIPT:alert(1)',
    'data:text/html,x',
    '/groups//evil.example',
    '/groups/..//evil.example',
    '/groups/../../etc',
    '/%2Fevil.example',
    '/%5Cevil.example',
    '/groups/%2e%2e',
    '/groups\n/evil',
    '\t//evil.example',
    ' /groups',
    '/groups#//evil.example',
    '/groups?next=//evil.example',
    '/groups?next=https://evil.example',
    '/api/session',
    '/.well-known/x',
    '/account@evil.example',
    'groups',
    '',
    `/groups/${'a'.repeat(600)}`,
    undefined,
    null,
    ['/groups', '//evil.example'],
    { toString: () => '/groups' },
  ])('%j leads to the start page', (path) => expect(toLocalPath(path)).toBe('/'))
})
