import { quantities, type QuantityKey } from '#shared/schemas/quantities'

const isQuantity = (key: string): key is QuantityKey => Object.hasOwn(quantities, key)

/** The engine's sentences name fields as files do (`bath.0`, `zeroPhononFwhmMeV`); the page names them as its rows do. */
export const inWords = (sentence: string): string =>
  sentence
    .replace(/\b(bath|modes)\.(\d+)/g, (_, list: string, index: string) =>
      list === 'bath' ? `bath term ${Number(index) + 1}` : `mode ${Number(index) + 1}`,
    )
    .replace(/\b[a-z]+(?:[A-Z][A-Za-z]*)+\b/g, (key) => (isQuantity(key) ? quantities[key].name : key))
