/** Kernel of {@link bonferroni} over the first `count` p-values; `adjusted` may be `pValues` itself. */
export function bonferroniKernel(pValues: Float64Array, count: number, adjusted: Float64Array): void {
  for (let i = 0; i < count; i++) adjusted[i] = Math.min(1, count * pValues[i]!)
}

/**
 * Bonferroni-adjusted p-values, min(1, m·p); a hypothesis is rejected when its adjusted p is at most the level.
 * The probability of any false rejection is at most the level, however the tests depend on each other.
 *
 * @param pValues m ≥ 0 values in [0, 1].
 * @returns adjusted values in the order given; NaN for NaN.
 *
 * Source: Dunn (1961), JASA 56:52–64, doi:10.1080/01621459.1961.10482090.
 */
export function bonferroni(pValues: readonly number[]): number[] {
  const adjusted = Float64Array.from(pValues)
  bonferroniKernel(adjusted, adjusted.length, adjusted)
  return [...adjusted]
}

/**
 * Level at which each of `count` p-values is judged. It is also the first level of Holm's procedure: whether any
 * hypothesis is rejected is the same question under both, and a critical value can be taken at it.
 */
export function bonferroniLevel(level: number, count: number): number {
  return level / count
}
