import { parse } from 'csv-parse/sync'
import type { TableReading } from '../schemas/measurement'
import { limits } from '../utils/limits'
import { unreadable } from './unreadable'

export type Delimiter = TableReading['delimiter']

export const delimiterCharacters: Record<Exclude<Delimiter, 'blanks'>, string> = {
  comma: ',',
  semicolon: ';',
  tab: '\t',
}

/** Marks that make a whole line a remark. The semicolon is one where it does not separate the columns. */
const commentStart = /^\s*(?:#|%|!|\/\/|;)/
const commentStartOfSemicolons = /^\s*(?:#|%|!|\/\/)/

export const isComment = (text: string, delimiter: Delimiter): boolean =>
  (delimiter === 'semicolon' ? commentStartOfSemicolons : commentStart).test(text)

/** A line without its remark mark, for labels that are written as remarks. */
export const withoutCommentMark = (text: string): string => text.replace(/^\s*(?:#+|%+|!+|\/\/+|;+)\s?/, '')

export const isBlank = (text: string): boolean => text.trim() === ''

/** A remark behind the numbers of a row begins with # after a blank or a delimiter. */
const cutRemark = (text: string): string => {
  const at = text.indexOf('#')
  return at > 0 && /[\s,;]/.test(text[at - 1] ?? '') ? text.slice(0, at).trimEnd() : text
}

const splitQuoted = (text: string, delimiter: string, line: number): string[] => {
  try {
    const records = parse(text, {
      delimiter,
      relax_column_count: true,
      trim: true,
      bom: false,
      skip_empty_lines: false,
    })
    return (records[0] as string[] | undefined) ?? []
  } catch {
    throw unreadable({ line }, 'a quotation mark that is not closed or stands inside a field', 'fields in pairs of "…"')
  }
}

/**
 * The fields of one line, trimmed of blanks. Blanks as delimiter are runs of spaces and tabs; the others stand for
 * themselves. Quoted fields may hold the delimiter. Empty fields at the end stay: the caller knows the columns.
 */
export const splitFields = (text: string, delimiter: Delimiter, line: number): string[] => {
  const row = cutRemark(text)
  if (delimiter === 'blanks') {
    const inner = row.trim()
    return inner === '' ? [] : inner.split(/[ \t]+/)
  }
  const character = delimiterCharacters[delimiter]
  if (row.includes('"')) return splitQuoted(row, character, line)
  const fields = row.split(character)
  if (fields.length > limits.tableColumns + 1)
    throw unreadable({ line }, `${fields.length} columns`, `at most ${limits.tableColumns}`)
  return fields.map((field) => field.trim())
}
