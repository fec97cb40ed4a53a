/** What a cell that is no number looks like; words stand under `extract.looks`. */
type NotANumber
  = | 'decimal-comma' | 'thousands' | 'censored' | 'minus-sign' | 'foreign-digits' | 'parentheses' | 'percent'
    | 'missing-code' | 'out-of-range' | 'other'

export type NumberReading
  = | { readonly kind: 'number', readonly value: number }
    | { readonly kind: 'missing' }
    | { readonly kind: 'not-a-number', readonly looks: NotANumber }

const PLAIN = /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?$/
const NONZERO = /[1-9]/

const LOOKS: readonly (readonly [NotANumber, RegExp])[] = [
  ['missing-code', /^(?:\.[A-Z_]?|n\/?a|nan|null|none|missing|nd|-+)$/i],
  ['censored', /^[<>≤≥]=?\s*[\d.,]+/],
  ['parentheses', /^\(\s*[\d.,]+\s*\)$/],
  ['percent', /^[+-]?[\d.,]+\s*%$/],
  ['minus-sign', /^[\u2010-\u2015\u2212\uFE63\uFF0D]\s*[\d.,]+$/],
  ['thousands', /^[+-]?\d{1,3}(?:[ \u00A0\u2009\u202F'’]\d{3})+(?:[.,]\d+)?$|^[+-]?\d{1,3}(?:,\d{3}){2,}(?:\.\d+)?$|^[+-]?\d{1,3}(?:,\d{3})+\.\d+$|^[+-]?\d{1,3}(?:\.\d{3})+,\d+$|^[+-]?\d{1,3}(?:\.\d{3}){2,}$/],
  ['decimal-comma', /^[+-]?\d*,\d+(?:[eE][+-]?\d+)?$/],
  ['foreign-digits', /^[+-]?[\p{Nd}.,٫٬]*\p{Nd}[\p{Nd}.,٫٬]*$/u],
]

/** Blanks that pad a cell; other white space is no padding. */
const unpadded = (text: string): string => text.replace(/^ +| +$/g, '')

/** A double that is neither beyond its range nor zero for digits that are not. */
function readPlain(text: string): NumberReading {
  const value = Number(text)
  const lost = value === 0 ? NONZERO.test(text.split(/[eE]/)[0] ?? '') : !Number.isFinite(value)
  return lost ? { kind: 'not-a-number', looks: 'out-of-range' } : { kind: 'number', value }
}

/**
 * Reads a cell as a number: plain decimal or exponent notation with a decimal point, nothing else. An empty
 * cell is missing; what is beyond the range of a double is no number. Nothing is guessed or repaired.
 */
export function readNumber(cell: string): NumberReading {
  if (PLAIN.test(cell)) return readPlain(cell)
  const text = unpadded(cell)
  if (text === '') return { kind: 'missing' }
  if (PLAIN.test(text)) return readPlain(text)
  const looks = LOOKS.find(([, pattern]) => pattern.test(text))?.[0] ?? 'other'
  return { kind: 'not-a-number', looks }
}
