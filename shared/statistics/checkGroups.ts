import { checkSample } from './checkSample'
import { InvalidSampleError } from './invalidSampleError'
import type { Sample } from './types'

export interface PackedGroups {
  /** The values of all groups, one group after the other. */
  readonly values: Float64Array
  /** Where group i begins; one entry more than there are groups, the last being the number of values. */
  readonly offsets: Uint32Array
}

/**
 * Copies groups into one array after checking them.
 *
 * @param least how many groups there must be, and how many values in each.
 * @throws {InvalidSampleError} `too-few-groups`, `sample-too-small`, `non-finite-value`.
 */
export function checkGroups(groups: readonly Sample[], least: { readonly groups: number, readonly size: number }): PackedGroups {
  if (groups.length < least.groups) throw new InvalidSampleError('too-few-groups')
  const offsets = new Uint32Array(groups.length + 1)
  groups.forEach((group, index) => {
    offsets[index + 1] = offsets[index]! + group.length
  })
  const values = new Float64Array(offsets[groups.length]!)
  groups.forEach((group, index) => values.set(checkSample(group, least.size), offsets[index]))
  return { values, offsets }
}
