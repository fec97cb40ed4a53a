import cdf from '@stdlib/stats-base-dists-t-cdf'
import quantile from '@stdlib/stats-base-dists-t-quantile'

/** P(T ≤ x) of Student's t distribution; df > 0, not necessarily whole; NaN outside the domain. */
export function tCdf(x: number, df: number): number {
  return cdf(x, df)
}

/** P(T > x), by symmetry and not by subtraction. Parameters as for {@link tCdf}. */
export function tSf(x: number, df: number): number {
  return cdf(-x, df)
}

/**
 * The x with P(T ≤ x) = p; NaN outside [0, 1]. For an upper tail q take −tQuantile(q, df): 1 − q has lost its
 * digits.
 */
export function tQuantile(p: number, df: number): number {
  return quantile(p, df)
}
