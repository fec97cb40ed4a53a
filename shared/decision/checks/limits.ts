import type { Reading } from '../../plan/terms'

/**
 * Whether something breaks a limit: 1 yes, 0 no, NaN where it cannot be told. NaN is carried by the rules of
 * three-valued logic, so that one procedure that is undefined does not hide what another shows.
 */
export type Breach = number

export const BREAKS = 1
export const KEEPS = 0
export const UNTOLD = Number.NaN

/** Breaks when any does. */
export function anyBreaks(a: Breach, b: Breach): Breach {
  if (a === BREAKS || b === BREAKS) return BREAKS
  return a === KEEPS && b === KEEPS ? KEEPS : UNTOLD
}

/** Breaks when both do. */
export function bothBreak(a: Breach, b: Breach): Breach {
  if (a === KEEPS || b === KEEPS) return KEEPS
  return a === BREAKS && b === BREAKS ? BREAKS : UNTOLD
}

const told = (breaks: boolean): Breach => (breaks ? BREAKS : KEEPS)

/** Below this many values `by-n` reads the lower confidence limit: only a clear departure counts. */
const BY_N = 50

export const readingAt = (reading: Reading, n: number): Exclude<Reading, 'by-n'> =>
  (reading === 'by-n' ? (n < BY_N ? 'lower-limit' : 'estimate') : reading)

/** A departure on either side of zero, of which the estimate or a limit of its interval is read. */
export function breaksTwoSided(estimate: number, lower: number, upper: number, limit: number, reading: Exclude<Reading, 'by-n'>): Breach {
  if (Number.isNaN(estimate)) return UNTOLD
  if (reading === 'estimate') return told(Math.abs(estimate) > limit)
  return reading === 'lower-limit' ? told(lower > limit || upper < -limit) : told(upper > limit || lower < -limit)
}

/** A departure upwards only. */
export function breaksUpwards(estimate: number, lower: number, upper: number, limit: number, reading: Exclude<Reading, 'by-n'>): Breach {
  const read = reading === 'estimate' ? estimate : reading === 'lower-limit' ? lower : upper
  return Number.isNaN(read) ? UNTOLD : told(read > limit)
}

/** A p-value breaks its level when it does not exceed it: the test rejects at that level. */
export const breaksLevel = (pValue: number, level: number): Breach => (Number.isNaN(pValue) ? UNTOLD : told(pValue <= level))

/** Size and level joined as the plan says; with one of them only, that one. */
export function joinBreaches(size: Breach | null, level: Breach | null, broken: 'either' | 'both'): Breach {
  if (size === null) return level ?? UNTOLD
  if (level === null) return size
  return broken === 'either' ? anyBreaks(size, level) : bothBreak(size, level)
}
