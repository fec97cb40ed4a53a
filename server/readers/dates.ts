/** ISO 8601 date, partial dates included (`2026-03`), with or without a time after it. */
const SHAPE = /^(\d{4})(?:-(\d{2})(?:-(\d{2})(?:T\S*)?)?)?$/

export type DateReading
  = | { readonly kind: 'date', readonly text: string }
    | { readonly kind: 'missing' }
    | { readonly kind: 'impossible' }
    | { readonly kind: 'other-notation' }

function daysOf(year: number, month: number): number {
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0
  return [31, leap ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31][month - 1] ?? 0
}

/**
 * Reads a cell as a calendar date, `text` being as much of it as is given. A date in another notation is not interpreted: whether 03/04 is March or
 * April nobody can tell from the file.
 */
export function readDate(cell: string): DateReading {
  const text = cell.trim()
  if (text === '') return { kind: 'missing' }
  const match = SHAPE.exec(text)
  if (!match) return { kind: 'other-notation' }
  const [, year = '', month, day] = match
  const monthExists = month === undefined || (Number(month) >= 1 && Number(month) <= 12)
  const dayExists = day === undefined || (Number(day) >= 1 && Number(day) <= daysOf(Number(year), Number(month)))
  if (!monthExists || !dayExists) return { kind: 'impossible' }
  return { kind: 'date', text: text.slice(0, 10) }
}
