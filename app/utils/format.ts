const minus = '−'
const superscripts: Record<string, string> = {
  '-': '⁻',
  '0': '⁰',
  '1': '¹',
  '2': '²',
  '3': '³',
  '4': '⁴',
  '5': '⁵',
  '6': '⁶',
  '7': '⁷',
  '8': '⁸',
  '9': '⁹',
}

const raise = (text: string): string => text.replace(/[-\d]/g, (sign) => superscripts[sign] ?? sign)

/** Significant digits without trailing zeros, a true minus, powers of ten beyond 10^5 and below 10^-4. Host independent. */
export const formatNumber = (value: number, digits = 4): string => {
  if (!Number.isFinite(value)) return '–'
  if (value === 0) return '0'
  const [mantissa = '', exponent = '0'] = value.toExponential(digits - 1).split('e')
  const power = Number(exponent)
  const text =
    power > 5 || power < -4
      ? `${String(Number(mantissa))} × 10${raise(String(power))}`
      : String(Number(value.toPrecision(digits)))
  return text.replace('-', minus)
}

/** Stored unit names as printed: cm^-1 becomes cm⁻¹; the dimensionless unit is empty. */
export const formatUnit = (unit: string): string =>
  unit === '1' ? '' : unit.replace(/\^(-?\d+)/g, (_, power: string) => raise(power))

/** Seconds as 8 s, 3 min, 1 h 20 min. */
export const formatDuration = (seconds: number): string => {
  if (seconds < 1) return '< 1 s'
  if (seconds < 90) return `${Math.round(seconds)} s`
  const minutes = Math.round(seconds / 60)
  return minutes < 90 ? `${minutes} min` : `${Math.floor(minutes / 60)} h ${minutes % 60} min`
}

/** 2026-12-01 14:05 in the reader's time zone. */
export const formatTime = (iso: string): string => {
  const time = new Date(iso)
  const two = (value: number) => String(value).padStart(2, '0')
  return `${time.getFullYear()}-${two(time.getMonth() + 1)}-${two(time.getDate())} ${two(time.getHours())}:${two(time.getMinutes())}`
}

/** Bytes as 12 kB, 3.4 MB. */
export const formatBytes = (bytes: number): string => {
  if (bytes < 1000) return `${bytes} B`
  if (bytes < 1e6) return `${formatNumber(bytes / 1e3, 3)} kB`
  return bytes < 1e9 ? `${formatNumber(bytes / 1e6, 3)} MB` : `${formatNumber(bytes / 1e9, 3)} GB`
}

/** Every digit of a stored value, as it would be typed back, with a true minus sign. */
export const formatExact = (value: number): string => String(value).replace(/^-/, minus)

const mostCharacters = 10

/** A stored value at rest in a narrow field: cut with an ellipsis where digits are left out; all of them on entry. */
export const formatBrief = (value: number): string => {
  const exact = formatExact(value)
  if (exact.length <= mostCharacters) return exact
  const [digits = '', exponent] = exact.split('e')
  const room = mostCharacters - 1 - (exponent === undefined ? 0 : exponent.length + 1)
  return `${digits.slice(0, room)}…${exponent === undefined ? '' : `e${exponent}`}`
}
