import { checkSample } from '../checkSample'
import type { Sample } from '../types'

/** How many values of [start, end) are zero or negative, where a logarithm does not exist. */
export function countNotPositive(values: Sample, start = 0, end = values.length): number {
  let count = 0
  for (let i = start; i < end; i++) if (values[i]! <= 0) count++
  return count
}

/**
 * Share of values that are zero or negative, 0 to 1.
 *
 * @param sample n ≥ 1 finite values.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`.
 */
export function shareNotPositive(sample: Sample): number {
  const values = checkSample(sample, 1)
  return countNotPositive(values) / values.length
}
