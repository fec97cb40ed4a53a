import { checkSample } from '../checkSample'
import { sortAscending } from '../sortAscending'
import type { Sample } from '../types'
import { createWorkspace, type Workspace } from '../workspace'

/**
 * Kernel of {@link median}; NaN for no values. Afterwards `workspace.ordered` holds the ordered values from
 * index 0 on.
 */
export function medianKernel(values: Float64Array, start: number, end: number, workspace: Workspace): number {
  const { ordered, spare } = workspace
  const n = end - start
  if (n === 0) return Number.NaN
  for (let i = 0; i < n; i++) ordered[i] = values[start + i]!
  sortAscending(ordered, 0, n, spare)
  const low = ordered[(n - 1) >> 1]!
  const high = ordered[n >> 1]!
  // Halves are taken first: the sum of two values may overflow.
  return low === high ? low : low / 2 + high / 2
}

/**
 * Median; the middle of the two middle values for an even n.
 *
 * @param sample n ≥ 1 finite values; not modified.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`.
 */
export function median(sample: Sample): number {
  const values = checkSample(sample, 1)
  return medianKernel(values, 0, values.length, createWorkspace(values.length))
}
