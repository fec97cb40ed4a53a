import { checkSample } from '../checkSample'
import { raise } from '../invalidSampleError'
import type { Sample } from '../types'
import { hasZeroSpread } from '../zeroSpread'
import { meanOffset, sumOfSquares } from './centre'

/** Kernel of {@link variance}; NaN for fewer than two values, not finite where squares overflow. */
export function varianceKernel(values: Float64Array, start: number, end: number): number {
  if (end - start < 2) return Number.NaN
  if (hasZeroSpread(values, start, end)) return 0
  return sumOfSquares(values, start, end, meanOffset(values, start, end), 1) / (end - start - 1)
}

/**
 * Variance with divisor n − 1, from centred values, never by subtracting squares; exactly 0 for a constant
 * sample.
 *
 * @param sample n ≥ 2 finite values.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value` (also where a square overflows).
 */
export function variance(sample: Sample): number {
  const values = checkSample(sample, 2)
  const result = varianceKernel(values, 0, values.length)
  raise(Number.isFinite(result) ? null : 'non-finite-value')
  return result
}
