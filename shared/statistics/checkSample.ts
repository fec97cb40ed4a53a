import { InvalidSampleError } from './invalidSampleError'
import type { Sample } from './types'

/**
 * Copies a sample after checking what every procedure demands.
 *
 * @param sample any number of values; not modified.
 * @param least the least number of values with which the procedure is defined.
 * @param most the greatest, where there is one.
 * @throws {InvalidSampleError} `sample-too-small`, `sample-too-large`, `non-finite-value`.
 */
export function checkSample(sample: Sample, least: number, most = Infinity): Float64Array {
  if (sample.length < least) throw new InvalidSampleError('sample-too-small')
  if (sample.length > most) throw new InvalidSampleError('sample-too-large')
  const values = Float64Array.from(sample)
  if (!values.every(Number.isFinite)) throw new InvalidSampleError('non-finite-value')
  return values
}
