import { tokenHex, type ColorMode } from './palette'

/** Names with a digit must be quoted, else canvas falls back to another font without a word. */
export const fontFamily = "'Source Sans 3', 'Source Sans Pro', sans-serif"

/** Everything about a figure's look that is not its data. Lengths in CSS pixels (1/96 inch). */
export interface FigureStyle {
  mode: ColorMode
  ink: string
  muted: string
  slate: string
  paper: string
  /** Text of tick labels and of labels at curves. */
  fontSize: number
  /** Text of axis titles. */
  titleSize: number
  hairline: number
  lineWidth: number
  tickLength: number
  minorTickLength: number
  /** Radius of a measured point. */
  pointRadius: number
}

export const figureStyle = (mode: ColorMode, width: number): FigureStyle => ({
  mode,
  ink: tokenHex('ink', mode),
  muted: tokenHex('muted', mode),
  slate: tokenHex('slate', mode),
  paper: tokenHex('paper', mode),
  fontSize: width < 420 ? 11 : 12,
  titleSize: width < 420 ? 12 : 13,
  hairline: 0.75,
  lineWidth: 1.4,
  tickLength: 6,
  minorTickLength: 3,
  pointRadius: width < 420 ? 1.6 : 1.9,
})

/**
 * Width of a text in the figure font, to a few percent: enough to set margins and to keep labels apart, and the same on
 * every machine because it asks no font engine. Relative advance widths of Source Sans 3.
 */
export const textWidth = (text: string, size: number): number => {
  let em = 0
  for (const character of text) {
    if (/[ijl.,:;|!'’]/.test(character)) em += 0.25
    else if (/[mwMW%—]/.test(character)) em += 0.8
    else if (/[A-ZΔΓΩ@]/.test(character)) em += 0.58
    else if (/[⁻⁰¹²³⁴⁵⁶⁷⁸⁹₀₁₂₃]/.test(character)) em += 0.36
    else if (character === ' ') em += 0.2
    else em += 0.497
  }
  return em * size
}

// eslint-disable-next-line no-control-regex -- these are exactly the characters that XML 1.0 cannot carry
const unprintable = /[\u0000-\u001f\u007f-\u009f\ufffe\uffff]/g
const loneSurrogate = /[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/g

/** A label is one line of text: line ends become blanks, characters that no XML file may hold are dropped. */
export const plainLabel = (text: string): string =>
  text
    .replace(/[\t\n\r]+/g, ' ')
    .replace(unprintable, '')
    .replace(loneSurrogate, '')
