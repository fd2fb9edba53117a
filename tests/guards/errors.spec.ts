import { describe, expect, it } from 'vitest'
import { errorCodes } from '../../shared/errors/codes'
import { filesBelow, isCode, read } from './source-tree'

const sources = ['server', 'shared', 'workers', 'app']
  .flatMap(filesBelow)
  .filter((path) => isCode(path) && path !== 'shared/errors/codes.ts')
  .map((path) => ({ path, text: read(path) }))

describe('error codes', () => {
  it.each(Object.entries(errorCodes))('%s has a status and a sentence', (code, { status, title }) => {
    expect(code).toMatch(/^[a-z]+\/[a-z-]+$/)
    expect(status).toBeGreaterThanOrEqual(400)
    expect(status).toBeLessThan(600)
    expect(title).toMatch(/^[A-Z].*\.$/)
  })

  it.each(Object.keys(errorCodes))('%s is used', (code) => {
    expect(sources.filter(({ text }) => text.includes(`'${code}'`)).map(({ path }) => path)).not.toEqual([])
  })

  it('are the only ones that leave the code', () => {
    const unknown = sources.flatMap(({ path, text }) =>
      [...text.matchAll(/new AppError\(\s*'([^']+)'/g)]
        .map((match) => match[1] ?? '')
        .filter((code) => !(code in errorCodes))
        .map((code) => `${path}: ${code}`),
    )
    expect(unknown).toEqual([])
  })

  it('are thrown by services as AppError, never as HTTP errors', () => {
    const wrong = sources.filter(({ path, text }) => path.startsWith('server/services/') && /createError\(/.test(text))
    expect(wrong.map(({ path }) => path)).toEqual([])
  })
})
