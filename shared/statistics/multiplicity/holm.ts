/** (m − j + 1) p_(j), capped at 1, for the value at `index`; equal values share the first of their places. */
function stepOf(pValues: Float64Array, count: number, index: number): number {
  const p = pValues[index]!
  let atLeast = 0
  for (let other = 0; other < count; other++) if (pValues[other]! >= p) atLeast++
  return Math.min(1, atLeast * p)
}

/**
 * Kernel of {@link holm} over the first `count` p-values; `adjusted` must not be `pValues`. Quadratic in the
 * count, which is a number of arms or sites.
 */
export function holmKernel(pValues: Float64Array, count: number, adjusted: Float64Array): void {
  for (let i = 0; i < count; i++) adjusted[i] = stepOf(pValues, count, i)
  // Running maximum in order of p. A neighbour that has taken its maximum already changes no other one.
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      if (pValues[j]! <= pValues[i]! && adjusted[j]! > adjusted[i]!) adjusted[i] = adjusted[j]!
    }
  }
}

/**
 * Holm-adjusted p-values; a hypothesis is rejected when its adjusted p is at most the level.
 *
 * In ascending order the adjusted values are max over j ≤ i of min(1, (m − j + 1) p_(j)). Rejects at least what
 * Bonferroni rejects, under the same guarantee: the probability of any false rejection is at most the level,
 * however the tests depend on each other.
 *
 * @param pValues m ≥ 0 values in [0, 1].
 * @returns adjusted values in the order given; equal p-values get equal ones.
 *
 * Source: Holm (1979), Scandinavian Journal of Statistics 6:65–70.
 */
export function holm(pValues: readonly number[]): number[] {
  const adjusted = new Float64Array(pValues.length)
  holmKernel(Float64Array.from(pValues), pValues.length, adjusted)
  return [...adjusted]
}
