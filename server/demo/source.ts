import { createRandom } from '../../shared/statistics/random/random'
import { standardNormal } from '../../shared/statistics/random/variates'

/** Where the demo's invented figures come from. */
export interface NormalSource {
  /** In (0, 1). */
  uniform(): number
  normal(): number
}

/** The same seed draws the same figures on every machine. */
export function seededSource(seed: number): NormalSource {
  const random = createRandom(seed)
  return { uniform: () => random.uniform(), normal: () => standardNormal(random) }
}
