import type { SampleProblem } from '../types'
import type { Workspace } from '../workspace'
import { meanOffset } from './centre'
import { medianKernel } from './median'
import { standardDeviationKernel } from './standardDeviation'

/**
 * Values less the mean of their own group: the residuals of a model with one mean per group. A group of equal
 * values gives exact zeros.
 *
 * @param offsets where each group begins, closed by the end of the last.
 * @param into takes the residuals at the places of the values; may be `values` itself.
 */
export function residualsKernel(values: Float64Array, offsets: Uint32Array, into: Float64Array): void {
  for (let group = 0; group + 1 < offsets.length; group++) {
    const start = offsets[group]!
    const end = offsets[group + 1]!
    if (start === end) continue
    const first = values[start]!
    const offset = meanOffset(values, start, end)
    for (let i = start; i < end; i++) into[i] = (values[i]! - first) - offset
  }
}

/**
 * Residuals divided by the standard deviation (n − 1) of their own group, so that groups of unequal spread can
 * be judged together. Dimensionless. Parameters as for {@link residualsKernel}.
 *
 * @returns `sample-too-small` for a group of one value, `zero-spread` for a group of equal values; `into` is
 *   then half filled.
 */
export function residualsByOwnSdKernel(values: Float64Array, offsets: Uint32Array, into: Float64Array): SampleProblem | null {
  for (let group = 0; group + 1 < offsets.length; group++) {
    const start = offsets[group]!
    const end = offsets[group + 1]!
    if (end - start === 1) return 'sample-too-small'
    if (start === end) continue
    const deviation = standardDeviationKernel(values, start, end)
    if (deviation === 0) return 'zero-spread'
    if (!Number.isFinite(deviation)) return 'non-finite-value'
    const first = values[start]!
    const offset = meanOffset(values, start, end)
    for (let i = start; i < end; i++) into[i] = ((values[i]! - first) - offset) / deviation
  }
  return null
}

/** Values less the median of their own group. Parameters as for {@link residualsKernel}. */
export function valuesAboutMediansKernel(values: Float64Array, offsets: Uint32Array, into: Float64Array, workspace: Workspace): void {
  for (let group = 0; group + 1 < offsets.length; group++) {
    const start = offsets[group]!
    const end = offsets[group + 1]!
    const centre = medianKernel(values, start, end, workspace)
    for (let i = start; i < end; i++) into[i] = values[i]! - centre
  }
}
