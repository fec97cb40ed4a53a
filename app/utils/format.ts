const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec']
const MINUS = '\u2212'
const NARROW_SPACE = '\u202f'
const SUPERSCRIPTS: Record<string, string> = { '-': '⁻', '0': '⁰', '1': '¹', '2': '²', '3': '³', '4': '⁴', '5': '⁵', '6': '⁶', '7': '⁷', '8': '⁸', '9': '⁹' }

/** As in print: `p = 0.034`, `p < 0.001`, `p > 0.999`. The full value stays with the report. */
export function formatPValue(p: number): string {
  if (p < 0.001) return 'p < 0.001'
  return p > 0.999 ? 'p > 0.999' : `p = ${p.toFixed(3)}`
}

/**
 * A figure with a fixed number of decimals and a true minus: −1.204. What these decimals would show as zero, or
 * ten million and more, is written with a power of ten: 3.1 × 10⁻⁵.
 */
export function formatFigure(value: number, decimals: number): string {
  const size = Math.abs(value)
  const fits = size === 0 || (size < 1e7 && size >= 0.5 * 10 ** -decimals)
  const sign = value < 0 ? MINUS : ''
  if (fits) return sign + size.toFixed(decimals)
  const [factor, exponent = '0'] = size.toExponential(Math.max(0, decimals - 1)).split('e')
  const power = [...exponent.replace('+', '')].map(character => SUPERSCRIPTS[character]).join('')
  return `${sign}${factor} × 10${power}`
}

/** A share as a percentage with one decimal: 0.153 is `15.3 %`. */
export const formatShare = (share: number) => `${(100 * share).toFixed(1)}${NARROW_SPACE}%`

/** `2026-06-12` is `12 Jun 2026`. */
export function formatDate(date: string): string {
  const [year, month, day] = date.split('-')
  return `${day} ${MONTHS[Number(month) - 1]} ${year}`
}

/** An ISO 8601 moment in UTC: `12 Jun 2026, 09:14 UTC`. */
export const formatMoment = (moment: string) => `${formatDate(moment.slice(0, 10))}, ${moment.slice(11, 16)} UTC`

const UNITS = ['B', 'kB', 'MB', 'GB'] as const

/** A size in decimal units: 52 428 800 is `52.4 MB`. */
export function formatBytes(bytes: number): string {
  const power = UNITS.findLastIndex((_unit, index) => bytes >= 1000 ** index)
  return power <= 0 ? `${bytes}${NARROW_SPACE}B` : `${(bytes / 1000 ** power).toFixed(1)}${NARROW_SPACE}${UNITS[power]}`
}
