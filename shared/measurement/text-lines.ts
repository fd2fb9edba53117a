import { AppError } from '../errors/app-error'
import type { TableReading } from '../schemas/measurement'
import { firstBytes, type ByteSource } from './byte-source'
import { foreignKind, kindBytes } from './file-kind'
import { unreadable } from './unreadable'

export type Encoding = TableReading['encoding']

/** Longest line the reader takes, in characters: far above any table of 1000 columns of numbers. */
export const maxLineLength = 100_000

/** Most lines of a file: every row that may be stored, a long header and footer, and as many remarks again. */
export const maxLines = 300_000

const sniffBytes = 64 * 1024

/** UTF-16 without a mark: Latin text has its zero bytes on one side only. */
const zeroBytesOn = (bytes: Uint8Array, parity: 0 | 1): number => {
  let count = 0
  for (let index = parity; index < bytes.length; index += 2) if (bytes[index] === 0) count += 1
  return count
}

const beginsAsUtf8 = (first: Uint8Array): boolean => {
  try {
    // A character may be cut at the end of the piece, so the decoder is told that more follows.
    new TextDecoder('utf-8', { fatal: true }).decode(first, { stream: true })
    return true
  } catch {
    return false
  }
}

/** The file holds bytes that the encoding does not know. */
export class WrongEncodingError extends AppError {
  constructor(encoding: Encoding) {
    const { detail, issues } = unreadable({}, `bytes that are not ${encoding}`, `text in ${encoding}`)
    super('measurement/unreadable', { detail, issues })
  }
}

/**
 * Encoding of a text file by its beginning: its byte order mark, the zero bytes of UTF-16, whether it is valid UTF-8,
 * and Windows-1252 (a superset of Latin-1 and ASCII) otherwise. Refuses what is no text. Reading on as UTF-8 can still
 * end in a WrongEncodingError; then it is Windows-1252 as well.
 */
export const detectEncoding = (source: ByteSource): Encoding => {
  const first = firstBytes(source, sniffBytes)
  if (first.length === 0) throw unreadable({}, 'nothing (0 bytes)', 'a table of numbers')
  const foreign = foreignKind(first.subarray(0, kindBytes))
  if (foreign !== undefined) throw unreadable({}, foreign, 'delimited text')
  if (first[0] === 0xff && first[1] === 0xfe) return 'utf-16le'
  if (first[0] === 0xfe && first[1] === 0xff) return 'utf-16be'
  const even = zeroBytesOn(first, 0)
  const odd = zeroBytesOn(first, 1)
  const many = first.length / 4
  if (odd > many && even === 0) return 'utf-16le'
  if (even > many && odd === 0) return 'utf-16be'
  if (even + odd > 0) throw unreadable({}, 'bytes of value 0', 'delimited text without binary data')
  return beginsAsUtf8(first) ? 'utf-8' : 'windows-1252'
}

export interface Line {
  /** From 1, as an editor counts. */
  number: number
  text: string
}

/** Text pieces of a file, without its byte order mark. Bytes that the encoding does not know are refused. */
function* decode(source: ByteSource, encoding: Encoding): Generator<string> {
  // Windows-1252 knows every byte; for the others a byte that does not fit means another encoding, so say so.
  const decoder = new TextDecoder(encoding, { fatal: true })
  try {
    for (const piece of source()) yield decoder.decode(piece, { stream: true })
    yield decoder.decode()
  } catch (error) {
    if (error instanceof TypeError) throw new WrongEncodingError(encoding)
    throw error
  }
}

const tooLong = (line: number) =>
  unreadable({ line }, `a line of more than ${maxLineLength} characters`, 'shorter lines, one row of the table each')

/** Lines of a file. LF, CR LF and lone CR all end a line, also mixed; the last line needs no ending. */
export function* readLines(source: ByteSource, encoding: Encoding): Generator<Line> {
  const ending = /\r\n|\n|\r/g
  let rest = ''
  let number = 1
  for (const piece of decode(source, encoding)) {
    const text = rest + piece
    // A CR at the very end may be half of a CR LF: it waits for the next piece.
    const usable = text.endsWith('\r') ? text.length - 1 : text.length
    let start = 0
    ending.lastIndex = 0
    for (let match = ending.exec(text); match !== null && match.index < usable; match = ending.exec(text)) {
      if (match.index - start > maxLineLength) throw tooLong(number)
      yield { number, text: text.slice(start, match.index) }
      number += 1
      if (number > maxLines) throw unreadable({}, `more than ${maxLines} lines`, `a table of at most ${maxLines} lines`)
      start = match.index + match[0].length
    }
    rest = text.slice(start)
    if (rest.length > maxLineLength) throw tooLong(number)
  }
  const last = rest.endsWith('\r') ? rest.slice(0, -1) : rest
  if (last.length > maxLineLength) throw tooLong(number)
  if (rest !== '') yield { number, text: last }
}
