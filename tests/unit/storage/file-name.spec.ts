import { describe, expect, it } from 'vitest'
import { cleanFileName } from '../../../server/utils/file-name'

const cases: [given: string, shown: string][] = [
  ['spectrum.csv', 'spectrum.csv'],
  ['../../etc/passwd', 'passwd'],
  ['..\\..\\windows\\win.ini', 'win.ini'],
  ['C:\\data\\scan 1.txt', 'scan 1.txt'],
  ['/etc/shadow', 'shadow'],
  ['..', 'file'],
  ['.', 'file'],
  ['...', 'file'],
  ['', 'file'],
  ['   ', 'file'],
  ['.htaccess', 'htaccess'],
  ['a\u0000b.csv', 'ab.csv'],
  ['a\r\nset-cookie: x=1.csv', 'aset-cookie_ x=1.csv'],
  ['gpj.\u202efdp.exe', 'gpj.fdp.exe'],
  ['zero\u200bwidth.csv', 'zerowidth.csv'],
  ['con', '_con'],
  ['NUL.txt', '_NUL.txt'],
  ['com1.csv', '_com1.csv'],
  ['<script>alert(1)</script>.csv', 'script_.csv'],
  ['a"b|c?d*.csv', 'a_b_c_d_.csv'],
  ['größe µm.csv', 'größe µm.csv'],
  ['スペクトル.csv', 'スペクトル.csv'],
  ['e\u0301.csv', '\u00e9.csv'],
  ['half\ud800.csv', 'half.csv'],
  ['trailing. . ', 'trailing'],
  ['%2e%2e%2fetc%2fpasswd', '%2e%2e%2fetc%2fpasswd'],
]

describe('names of uploaded files', () => {
  it.each(cases)('%j is shown as %j', (given, shown) => {
    expect(cleanFileName(given)).toBe(shown)
  })

  it('are cut at 200 characters with the extension kept', () => {
    const name = cleanFileName(`${'x'.repeat(300)}.csv`)
    expect([...name]).toHaveLength(200)
    expect(name.endsWith('x.csv')).toBe(true)
    expect([...cleanFileName('😀'.repeat(300))]).toHaveLength(200)
    expect([...cleanFileName(`a.${'b'.repeat(300)}`)]).toHaveLength(200)
  })
})
