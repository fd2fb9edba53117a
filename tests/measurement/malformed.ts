/** Files that are no readable table, each with what its refusal must name. Large ones are made when asked for. */
export interface Malformed {
  name: string
  make: () => Uint8Array
  /** The sentence that the person gets. */
  says: RegExp
}

const text = (content: string) => () => new TextEncoder().encode(content)
const bytes =
  (...values: number[]) =>
  () =>
    Uint8Array.from(values)

const rows = (count: number, row: (index: number) => string) =>
  Array.from({ length: count }, (_, index) => row(index)).join('\n')
const good = (count = 8) => rows(count, (index) => `${1840 + index};${0.1 + index / 100}`)
/** A sound table with one bad line at line 5. */
const spoilt = (line: string, header = 'Energy (meV);OD') => text(`${header}\n${good(3)}\n${line}\n${good(4)}\n`)
const withMagic =
  (magic: readonly number[], tail = good()) =>
  () =>
    Uint8Array.from([...magic, ...new TextEncoder().encode(tail)])

const repeated = (piece: string, length: number) =>
  text(piece.repeat(Math.ceil(length / piece.length)).slice(0, length))

export const malformed: readonly Malformed[] = [
  { name: 'empty.csv', make: bytes(), says: /nothing \(0 bytes\)/ },
  { name: 'one-newline.csv', make: text('\n'), says: /only blank lines/ },
  { name: 'blank-lines.csv', make: text(' \n\t\n\r\n   \n'), says: /only blank lines/ },
  { name: 'mark-only.csv', make: bytes(0xef, 0xbb, 0xbf), says: /only blank lines/ },
  { name: 'mark-only-utf16.csv', make: bytes(0xff, 0xfe), says: /only blank lines/ },
  { name: 'zero-bytes.csv', make: withMagic([0x31, 0x3b, 0x00, 0x0a]), says: /bytes of value 0/ },
  { name: 'zero-bytes-only.csv', make: () => new Uint8Array(4096), says: /bytes of value 0/ },
  { name: 'half-utf16.csv', make: bytes(0xff, 0xfe, 0x31, 0x00, 0x3b), says: /not utf-16le/ },
  { name: 'lone-surrogate.csv', make: bytes(0xff, 0xfe, 0x00, 0xd8, 0x31, 0x00), says: /not utf-16le/ },
  { name: 'one-number.csv', make: text('1850'), says: /no rows of numbers/ },
  {
    name: 'one-column.csv',
    make: text(`OD\n${rows(9, String)}\n`),
    says: /line 2.*one number.*at least an axis and a value/,
  },
  { name: 'header-only.csv', make: text('Energy (meV);OD\n'), says: /line 1.*no rows of numbers/ },
  { name: 'two-rows.csv', make: text('Energy (meV);OD\n1;2\n3;4\n'), says: /2 rows of numbers.*at least 3/ },
  { name: 'prose.txt', make: text('Dear colleague,\nthe samples are ready.\n'), says: /line 1.*no rows of numbers/ },
  { name: 'ragged-short.csv', make: spoilt('1843'), says: /line 5.*1 field.*2 columns/ },
  { name: 'ragged-long.csv', make: spoilt('1843;0.1;7'), says: /line 5.*3 fields.*2 columns/ },
  {
    name: 'ragged-blanks.txt',
    make: text(`${rows(5, (i) => `${i} ${i}`)}\n6\n7 7\n`),
    says: /line 6.*1 field.*2 columns/,
  },
  { name: 'open-quote.csv', make: spoilt('1843;"0.1'), says: /line 5.*quotation mark/ },
  { name: 'stray-quote.csv', make: spoilt('1843;0"1'), says: /line 5.*quotation mark/ },
  { name: 'text-in-values.csv', make: spoilt('1843;saturated'), says: /line 5, column 2.*"saturated".*a number/ },
  { name: 'text-in-axis.csv', make: spoilt('pause;0.1'), says: /line 5.*"pause"/ },
  { name: 'overflow.csv', make: spoilt('1843;1e400'), says: /line 5, column 2.*"1e400".*below 1\.8e308/ },
  { name: 'overflow-axis.csv', make: spoilt('1e300;0.1'), says: /line 5, column 1.*an energy of 1e\+300 meV/ },
  { name: 'hexadecimal.csv', make: spoilt('1843;0x1F'), says: /line 5, column 2.*"0x1F".*hexadecimal/ },
  { name: 'formula.csv', make: spoilt('1843;=A1*2'), says: /line 5, column 2.*"=A1\*2".*formula/ },
  { name: 'formula-at.csv', make: spoilt('1843;@SUM(A1)'), says: /line 5, column 2.*formula/ },
  { name: 'percent.csv', make: spoilt('1843;12%'), says: /line 5, column 2.*"12%".*percent/ },
  { name: 'with-unit.csv', make: spoilt('1843 meV;0.1'), says: /line 5, column 1.*"1843 meV".*without a unit/ },
  { name: 'two-points.csv', make: spoilt('1843;0.1.2'), says: /line 5, column 2.*"0\.1\.2".*decimal point/ },
  { name: 'date.csv', make: spoilt('1843;2026-12-01'), says: /line 5, column 2.*"2026-12-01".*a number/ },
  { name: 'mixed-decimal.csv', make: spoilt('1843;0,15'), says: /line 5.*"0,15" although line 2.*one decimal mark/ },
  { name: 'zero-width.csv', make: spoilt('1843;0.1\u200b5'), says: /line 5, column 2.*<U\+200B>.*invisible/ },
  { name: 'right-to-left.csv', make: spoilt('1843;\u202e51.0'), says: /line 5, column 2.*<U\+202E>.*invisible/ },
  { name: 'soft-hyphen.csv', make: spoilt('1843;0.1\u00ad5'), says: /line 5, column 2.*<U\+00AD>.*invisible/ },
  { name: 'arabic-digits.csv', make: spoilt('1843;٠٫١٥'), says: /line 5, column 2.*another script/ },
  { name: 'letter-o.csv', make: spoilt('1843;O.15'), says: /line 5, column 2.*"O\.15"/ },
  { name: 'cyrillic-e.csv', make: spoilt('1843;1\u04353'), says: /line 5, column 2/ },
  { name: 'superscript.csv', make: spoilt('1843;1.5×10³'), says: /line 5, column 2/ },
  {
    name: 'wavelength-zero.csv',
    make: text(`nm;OD\n${rows(6, (i) => `${i * 100};0.${i}`)}\n`),
    says: /line 2, column 1.*0 nm.*above 0/,
  },
  {
    name: 'wavelength-negative.csv',
    make: text(`Wavelength (nm);OD\n${rows(6, (i) => `${i * 100 - 300};0.${i}`)}\n`),
    says: /line 2, column 1.*-300 nm.*above 0/,
  },
  {
    name: 'negative-sigma.csv',
    make: text(`Energy (meV);OD;sigma\n${rows(6, (i) => `${1840 + i};0.1${i};${i === 3 ? '-' : ''}0.01`)}\n`),
    says: /line 5, column 3.*-0\.01.*0 or more/,
  },
  {
    name: 'constant-axis.csv',
    make: text(`Energy (meV);OD\n${rows(6, (i) => `1850;0.1${i}`)}\n`),
    says: /1 different positions.*is this the axis/,
  },
  {
    name: 'second-table.csv',
    make: text(`Energy (meV);OD\n${good(6)}\nsecond scan\n${good(5)}\n`),
    says: /line 8.*second scan/,
  },
  {
    name: 'values-too-large.csv',
    make: text(`Wavelength (nm);counts/nm\n${rows(6, (i) => `${60000 + i};1e307`)}\n`),
    says: /too large/,
  },
  { name: 'long-line.csv', make: repeated('1;', 10 * 2 ** 20), says: /line 1.*more than 100000 characters/ },
  { name: 'long-line-of-text.csv', make: repeated('x', 10 * 2 ** 20), says: /line 1.*more than 100000 characters/ },
  {
    name: 'million-columns.csv',
    make: () => text(`${'1;'.repeat(10 ** 6)}\n`)(),
    says: /line 1.*more than 100000 characters/,
  },
  {
    name: 'many-columns.csv',
    make: () => text(rows(4, () => '1;'.repeat(2000)))(),
    says: /2001 columns.*at most 1000/,
  },
  {
    name: 'many-blank-columns.txt',
    make: () => text(rows(4, (i) => `${i} `.repeat(2000)))(),
    says: /2000 columns.*at most 1000/,
  },
  {
    name: 'too-many-rows.csv',
    make: () => text(`Energy (meV);OD\n${rows(200_001, (i) => `${1000 + i / 1000};1`)}\n`)(),
    says: /more than 200000 rows/,
  },
  {
    name: 'too-many-lines.csv',
    make: () => text(`Energy (meV);OD\n${good()}\n${'\n'.repeat(300_001)}`)(),
    says: /more than 300000 lines/,
  },
  {
    name: 'header-of-6000-lines.csv',
    make: () => text(`${rows(6000, () => 'remark')}\n${good()}\n`)(),
    says: /no rows of numbers/,
  },
  { name: 'picture.csv', make: withMagic([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a]), says: /PNG image.*delimited text/ },
  { name: 'archive.csv', make: withMagic([0x50, 0x4b, 0x03, 0x04]), says: /ZIP archive/ },
  { name: 'document.csv', make: withMagic([0x25, 0x50, 0x44, 0x46, 0x2d]), says: /PDF document/ },
  { name: 'program.csv', make: withMagic([0x7f, 0x45, 0x4c, 0x46]), says: /a program/ },
  { name: 'old-spreadsheet.csv', make: withMagic([0xd0, 0xcf, 0x11, 0xe0]), says: /binary office document/ },
  { name: 'compressed.csv', make: withMagic([0x1f, 0x8b, 0x08]), says: /gzip archive/ },
  { name: 'array.csv', make: withMagic([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59]), says: /NumPy array/ },
  { name: 'hdf.csv', make: withMagic([0x89, 0x48, 0x44, 0x46]), says: /HDF5/ },
  { name: 'page.csv', make: text(`<!DOCTYPE html><html><body>${good()}</body></html>`), says: /HTML page/ },
  {
    name: 'vector.csv',
    make: text(`<svg xmlns="http://www.w3.org/2000/svg"><script>1</script></svg>`),
    says: /XML or SVG/,
  },
  {
    name: 'entities.csv',
    make: text('<?xml version="1.0"?><!DOCTYPE lolz [<!ENTITY lol "lol">]><lolz>&lol;</lolz>'),
    says: /XML or SVG/,
  },
  { name: 'object.json', make: text('{"__proto__":{"polluted":true},"x":[1,2,3]}'), says: /no rows of numbers/ },
]
