import { createRandom } from '#shared/statistics/random/random'
import { standardExponential, standardNormal } from '#shared/statistics/random/variates'

/** Normal values of mean 0 and SD 1, the same for the same seed. */
export function normalSample(n: number, seed: number): number[] {
  const random = createRandom(seed)
  return Array.from({ length: n }, () => standardNormal(random))
}

/** Exponential values of mean 1, the same for the same seed. */
export function exponentialSample(n: number, seed: number): number[] {
  const random = createRandom(seed)
  return Array.from({ length: n }, () => standardExponential(random))
}
