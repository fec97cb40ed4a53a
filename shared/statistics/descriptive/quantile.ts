import { checkSample } from '../checkSample'
import { sortAscending } from '../sortAscending'
import type { Sample } from '../types'

/** Kernel of {@link quantile} for values that are in order already; NaN for no values. */
export function quantileOfOrdered(ordered: Float64Array, start: number, end: number, p: number): number {
  const position = (end - start - 1) * p
  const below = Math.floor(position)
  const low = ordered[start + below] ?? Number.NaN
  const high = ordered[Math.min(start + below + 1, end - 1)] ?? Number.NaN
  return low + (position - below) * (high - low)
}

/**
 * Sample quantile, type 7 of Hyndman & Fan: linear between the order statistics at 1 + (n − 1) p. R's default.
 *
 * @param sample n ≥ 1 finite values; not modified.
 * @param p probability, 0 ≤ p ≤ 1; NaN outside.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`.
 *
 * Source: Hyndman & Fan (1996), The American Statistician 50:361–365, doi:10.2307/2684934.
 */
export function quantile(sample: Sample, p: number): number {
  const values = checkSample(sample, 1)
  if (!(p >= 0 && p <= 1)) return Number.NaN
  sortAscending(values, 0, values.length, new Float64Array(values.length))
  return quantileOfOrdered(values, 0, values.length, p)
}
