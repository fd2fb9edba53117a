import { parseQuantity } from '#shared/utils/parse-quantity'
import type { Quantity } from '#shared/schemas/quantity'

const unitOf = (item: string): string =>
  /^[^a-zA-Zµμ°]*?(?:\de[+-]?\d+)?\s*((?:1\/)?[a-zA-Zµμ°].*)?$/.exec(item)?.[1] ?? ''

/** Cuts at commas, semicolons, line ends and blanks, but keeps a unit with its number. */
const cut = (text: string): string[] =>
  text
    .replace(/[\s\u00a0]+/g, ' ')
    .replace(/ ?([;,]) ?/g, ';')
    .replace(/ (?=[+-]?[\d.])/g, ';')
    .split(';')
    .map((item) => item.trim())
    .filter((item) => item !== '')

const mostValues = 1000
const range = /^(.+?) to (.+?) step (.+)$/

/** `0 to 20 step 0.5`: equal steps from the first value to the last one that does not pass the end. */
const expand = (item: string, quantity: Quantity): (number | string)[] => {
  const bounds = range.exec(item)?.slice(1) ?? []
  const unit = unitOf(bounds[2] ?? '')
  const [start, end, step] = bounds.map((text) => parseQuantity(unitOf(text) ? text : `${text} ${unit}`, quantity))
  if (!start?.ok || !end?.ok || !step?.ok || !(step.value > 0) || !(end.value >= start.value)) return [item]
  const count = Math.floor((end.value - start.value) / step.value + 1e-9) + 1
  if (count > mostValues) return [item]
  return Array.from({ length: count }, (_, k) => Number((start.value + k * step.value).toPrecision(12)))
}

/**
 * Reads a list of values of one quantity as typed: `4, 20, 77 K`, `0; 0,5; 1`, `0 to 20 step 0.5 ps`. A unit that only
 * the last value carries holds for all. What cannot be read stays as text, for the schema to refuse by its place.
 */
export const parseList = (text: string, quantity: Quantity): (number | string)[] => {
  const whole = text.trim()
  if (range.test(whole)) return expand(whole, quantity)
  const items = cut(text)
  const last = items.at(-1) ?? ''
  const isOnlyUnit = items.slice(0, -1).every((item) => unitOf(item) === '')
  const shared = isOnlyUnit && parseQuantity(last, quantity).ok ? unitOf(last) : ''
  return items.map((item) => {
    const parsed = parseQuantity(unitOf(item) || !shared ? item : `${item} ${shared}`, quantity)
    return parsed.ok ? parsed.value : item
  })
}
