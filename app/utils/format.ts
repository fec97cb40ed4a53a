const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec']
const MINUS = '\u2212'

const signed = (text: string) => text.replace('-', MINUS)

/** As in print: `p = 0.034`, `p < 0.001`, `p > 0.999`. The full value stays with the report. */
export function formatPValue(p: number): string {
  if (p < 0.001) return 'p < 0.001'
  return p > 0.999 ? 'p > 0.999' : `p = ${p.toFixed(3)}`
}

/** A figure with a fixed number of decimals and a true minus; very large or small ones in exponent notation. */
export function formatFigure(value: number, decimals: number): string {
  const size = Math.abs(value)
  if (size !== 0 && (size >= 1e7 || size < 10 ** -decimals / 2)) return signed(value.toExponential(decimals - 1))
  return signed(value.toFixed(decimals))
}

/** A share as a percentage with one decimal: 0.153 is `15.3 %`. */
export const formatShare = (share: number) => `${(100 * share).toFixed(1)}\u202f%`

/** `2026-06-12` is `12 Jun 2026`. */
export function formatDate(date: string): string {
  const [year, month, day] = date.split('-')
  return `${day} ${MONTHS[Number(month) - 1]} ${year}`
}

/** An ISO moment in UTC: `12 Jun 2026, 09:14 UTC`. */
export const formatMoment = (moment: string) => `${formatDate(moment.slice(0, 10))}, ${moment.slice(11, 16)} UTC`

export function formatBytes(bytes: number): string {
  if (bytes < 1000) return `${bytes} B`
  const power = Math.min(3, Math.floor(Math.log10(bytes) / 3))
  return `${(bytes / 1000 ** power).toFixed(1)} ${['B', 'kB', 'MB', 'GB'][power]}`
}
