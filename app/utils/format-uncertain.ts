import { superscript } from '#shared/figure/format'

/**
 * A number with its standard uncertainty in the last digits, 1.24(3), as JCGM 100:2008, 7.2.2 writes it. Two digits of
 * uncertainty when the first is a 1, else one.
 */
export const formatUncertain = (value: number, uncertainty: number | null): string => {
  if (uncertainty === null || !(uncertainty > 0) || !Number.isFinite(uncertainty)) return formatNumber(value, 5)
  const order = Math.floor(Math.log10(uncertainty))
  const leading = Math.floor(uncertainty / 10 ** order + 1e-9)
  // Rounding may carry: 0.0196 with one digit would be 0.02.
  const place = leading === 1 ? order - 1 : order
  const size = Math.max(Math.abs(value), uncertainty)
  const exponent = Math.floor(Math.log10(size))
  const isPlain = exponent < 6 && place <= 0 && exponent > -5
  const shift = isPlain ? 0 : exponent
  const decimals = Math.max(0, shift - place)
  const scaled = value / 10 ** shift
  const digits = Math.round(uncertainty / 10 ** place)
  const text = `${scaled.toFixed(decimals).replace('-', '−')}(${digits})`
  return isPlain ? text : `${text} × 10${superscript(shift)}`
}
