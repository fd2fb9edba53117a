import { describe, expect, it } from 'vitest'
import { listPackages, renderRow } from '../../scripts/notices.mjs'
import { read } from './source-tree'

/** Licences that ask for nothing but the notice itself. */
const permissive = [
  ...[
    'MIT',
    'MIT-0',
    'ISC',
    '0BSD',
    'BSD-2-Clause',
    'BSD-3-Clause',
    'Apache-2.0',
    'BlueOak-1.0.0',
    'CC0-1.0',
    'CC-BY-4.0',
  ],
  ...['Unlicense', 'Python-2.0', 'OFL-1.1', '(MIT OR CC0-1.0)', 'MIT OR Apache-2.0', '(BSD-3-Clause OR GPL-2.0)'],
]

describe('third-party notices', () => {
  const packages = listPackages()
  const notices = read('THIRD-PARTY-NOTICES.md')

  it('name every package of the product in its locked version', () => {
    expect(packages.length).toBeGreaterThan(100)
    const lines = new Set(notices.split('\n'))
    // When this fails: npm run notices
    expect(packages.map(renderRow).filter((row) => !lines.has(row))).toEqual([])
  })

  it('name nothing that is gone', () => {
    const rows = notices.split('\n').filter((line) => /^\| [^|]+ \| \d/.test(line))
    expect(rows.length).toBe(packages.length)
  })

  it('hold only licences that let the product be passed on', () => {
    expect(
      packages.filter(({ licence }) => !permissive.includes(licence)).map(({ name, licence }) => `${name}: ${licence}`),
    ).toEqual([])
  })

  it('print the licence of the typeface', () => {
    expect(notices).toContain('SIL OPEN FONT LICENSE')
  })
})
