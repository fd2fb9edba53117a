export interface SymbolPart {
  text: string
  place: 'base' | 'sub' | 'sup'
  /** Variables are set in italics; numbers, operators, functions and abbreviations of words upright. */
  italic: boolean
}

const functions = 'exp|coth|cos|sin|ln|Re|Im'
const pieces = new RegExp(`(?<!\\p{L})(?:${functions})(?!\\p{L})|\\p{L}+|[^\\p{L}]+`, 'gu')
const isFunction = (text: string): boolean => new RegExp(`^(?:${functions})$`).test(text)

/** Base letters are variables; in sub- and superscripts only single small letters are, words and capitals are not. */
const isVariable = (text: string, place: SymbolPart['place']): boolean =>
  place === 'base' ? /\p{L}/u.test(text) && !isFunction(text) : /^\p{Ll}$/u.test(text)

/** Splits the light markup `E_0`, `Γ_{ens}`, `cm^{-1}` (`_` sub, `^` super, braces group) into parts to print. */
export const parseSymbol = (symbol: string): SymbolPart[] =>
  [...symbol.matchAll(/([_^])(?:\{([^}]*)\}|(.))|([^_^]+)/gu)].flatMap(([, mark, group, single, base]) => {
    const place = mark === '_' ? 'sub' : mark === '^' ? 'sup' : 'base'
    const text = base ?? group ?? single ?? ''
    const words = place === 'base' ? (text.match(pieces) ?? []) : [text]
    return words.map((word) => ({ text: word, place, italic: isVariable(word, place) }))
  })

/** The symbol as plain text, for accessible names. */
export const symbolText = (symbol: string): string =>
  parseSymbol(symbol)
    .map((part) => part.text)
    .join('')
