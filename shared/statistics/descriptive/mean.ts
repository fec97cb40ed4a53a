import { checkSample } from '../checkSample'
import type { Sample } from '../types'
import { meanOffset } from './centre'

/** Kernel of {@link mean}; NaN for no values. */
export function meanKernel(values: Float64Array, start: number, end: number): number {
  return end > start ? values[start]! + meanOffset(values, start, end) : Number.NaN
}

/**
 * Arithmetic mean, in two passes.
 *
 * @param sample n ≥ 1 finite values.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`.
 */
export function mean(sample: Sample): number {
  const values = checkSample(sample, 1)
  return meanKernel(values, 0, values.length)
}
