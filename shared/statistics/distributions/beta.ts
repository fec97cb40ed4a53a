import quantile from '@stdlib/stats-base-dists-f-quantile'

/**
 * The x with P(X ≤ x) = p for the beta distribution with a, b > 0, through F: x = aF/(b + aF) with 2a and 2b
 * degrees of freedom; NaN outside [0, 1].
 */
export function betaQuantile(p: number, a: number, b: number): number {
  const odds = a / b * quantile(p, 2 * a, 2 * b)
  return odds === Infinity ? 1 : odds / (1 + odds)
}
