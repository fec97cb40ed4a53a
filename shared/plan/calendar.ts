import type { Look } from './schema'

/**
 * Days since 1970-01-01 of an ISO 8601 calendar date (proleptic Gregorian), by the era arithmetic of
 * H. Hinnant, "chrono-compatible low-level date algorithms": years begin in March, eras have 400 years.
 */
export function dayNumber(date: string): number {
  const [year = 0, month = 1, day = 1] = date.split('-').map(Number)
  const shifted = month <= 2 ? year - 1 : year
  const era = Math.floor(shifted / 400)
  const yearOfEra = shifted - era * 400
  const dayOfYear = Math.floor((153 * ((month + 9) % 12) + 2) / 5) + day - 1
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear
  return era * 146_097 + dayOfEra - 719_468
}

/** First and last day, as day numbers, on which an extract's cut-off may lie to be this look. */
export function lookWindow(look: Look): { readonly first: number, readonly last: number } {
  const planned = dayNumber(look.cutOff)
  return { first: planned - look.daysBefore, last: planned + look.daysAfter }
}
