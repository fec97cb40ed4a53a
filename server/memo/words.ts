import type { Measure } from '../../shared/decision/report'

/** Words of one locale: a key of the catalogue with its figures. */
export type Say = (key: string, params?: Readonly<Record<string, string | number>>) => string

/** Decimals that a measure is printed with; full precision stands in the attached file. */
const DECIMALS: Readonly<Record<Measure, number>> = {
  'skewness': 2, 'excess-kurtosis': 2, 'shapiro-wilk': 3, 'anderson-darling': 3, 'sd-ratio': 2, 'brown-forsythe': 2,
  'share-missing': 1, 'count': 0, 'not-positive': 0,
}

const MINUS = '\u2212'
const SMALLEST_P = 0.001

export function decimal(value: number, digits: number): string {
  const text = Math.abs(value).toFixed(digits)
  return value < 0 && Number(text) !== 0 ? MINUS + text : text
}

/** A figure of a report as it is printed; shares become percentages. */
export const measured = (measure: Measure, value: number) =>
  measure === 'share-missing' ? `${decimal(100 * value, DECIMALS[measure])} %` : decimal(value, DECIMALS[measure])

/** As in print: p = 0.034, p < 0.001. */
export const pValue = (p: number) => p < SMALLEST_P ? 'p < 0.001' : `p = ${decimal(p, 3)}`

/** A level or limit as registered, without padding zeros. */
export const registered = (value: number) => value < 0 ? MINUS + String(-value) : String(value)

export const count = (value: number) => String(value).replace(/\B(?=(\d{3})+$)/g, '\u202F')

/** Calendar date (ISO 8601) in words, e.g. 12 Jun 2026. */
export function dateWords(iso: string, say: Say): string {
  const [year, month, day] = iso.slice(0, 10).split('-').map(Number)
  return `${day} ${say(`memo.month.${month}`)} ${year}`
}

/** Moment with its zone, to the second. */
export const momentWords = (iso: string, say: Say) => `${dateWords(iso, say)}, ${iso.slice(11, 19)} UTC`

/** A hash in groups of eight, which can be compared by eye and may break over lines. */
export const grouped = (hash: string) => hash.match(/.{1,8}/g)?.join(' ') ?? hash
