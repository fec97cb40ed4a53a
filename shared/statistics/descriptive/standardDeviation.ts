import { checkSample } from '../checkSample'
import { raise } from '../invalidSampleError'
import type { Sample } from '../types'
import { hasZeroSpread } from '../zeroSpread'
import { deviationScale, meanOffset, sumOfSquares } from './centre'

/** Kernel of {@link standardDeviation}; NaN for fewer than two values, not finite where the spread overflows. */
export function standardDeviationKernel(values: Float64Array, start: number, end: number): number {
  if (end - start < 2) return Number.NaN
  if (hasZeroSpread(values, start, end)) return 0
  const offset = meanOffset(values, start, end)
  const scale = deviationScale(values, start, end, offset)
  return scale * Math.sqrt(sumOfSquares(values, start, end, offset, scale) / (end - start - 1))
}

/**
 * Standard deviation with divisor n − 1, from centred values, in the unit of the values; exactly 0 for a
 * constant sample.
 *
 * @param sample n ≥ 2 finite values.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value` (also where the spread overflows).
 */
export function standardDeviation(sample: Sample): number {
  const values = checkSample(sample, 2)
  const deviation = standardDeviationKernel(values, 0, values.length)
  raise(Number.isFinite(deviation) ? null : 'non-finite-value')
  return deviation
}
