import { checkSample } from '../checkSample'
import { raise } from '../invalidSampleError'
import type { Sample } from '../types'
import { hasZeroSpread } from '../zeroSpread'
import { meanOffset, sumOfSquares } from './centre'

/**
 * Variance with divisor n − 1, from centred values, never by subtracting squares; exactly 0 for a constant
 * sample.
 *
 * @param sample n ≥ 2 finite values.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value` (also where a square overflows).
 */
export function variance(sample: Sample): number {
  const values = checkSample(sample, 2)
  const n = values.length
  if (hasZeroSpread(values, 0, n)) return 0
  const result = sumOfSquares(values, 0, n, meanOffset(values, 0, n), 1) / (n - 1)
  raise(Number.isFinite(result) ? null : 'non-finite-value')
  return result
}
