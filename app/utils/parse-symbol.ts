export interface SymbolPart {
  text: string
  place: 'base' | 'sub' | 'sup'
  /** Variables are set in italics; numbers and abbreviations of words upright. */
  italic: boolean
}

const isVariable = (text: string, place: SymbolPart['place']): boolean =>
  place === 'base' ? /\p{L}/u.test(text) : /^(?:\p{L}|ω|[ijknm])$/u.test(text) && !/^[A-Z]$/.test(text)

/** Splits the light markup `E_0`, `Γ_{ens}`, `cm^{-1}` (`_` sub, `^` super, braces group) into parts to print. */
export const parseSymbol = (symbol: string): SymbolPart[] => {
  const parts: SymbolPart[] = []
  for (const match of symbol.matchAll(/([_^])(?:\{([^}]*)\}|(.))|([^_^]+)/gu)) {
    const [, mark, group, single, base] = match
    const place = mark === '_' ? 'sub' : mark === '^' ? 'sup' : 'base'
    const text = base ?? group ?? single ?? ''
    parts.push({ text, place, italic: isVariable(text, place) })
  }
  return parts
}

/** The symbol as plain text, for accessible names. */
export const symbolText = (symbol: string): string =>
  parseSymbol(symbol)
    .map((part) => part.text)
    .join('')
