/** What rounding alone can make of equal decimal values: eight units in the last place. */
const NOISE = 8 * Number.EPSILON

/** A spread that cannot be told from rounding, given the largest absolute value it was formed from. */
export function isRounding(spread: number, magnitude: number): boolean {
  return spread <= NOISE * magnitude
}

/**
 * Whether a sample is constant up to rounding. The range is looked at and never the variance, which rounding
 * makes positive: the variance of twelve times 3.7 is not 0 in floating point.
 */
export function hasZeroSpread(values: Float64Array, start: number, end: number): boolean {
  let low = values[start]!
  let high = low
  for (let i = start + 1; i < end; i++) {
    const value = values[i]!
    if (value < low) low = value
    else if (value > high) high = value
  }
  return isRounding(high - low, Math.max(Math.abs(low), Math.abs(high)))
}
