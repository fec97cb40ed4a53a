import betainc from '@stdlib/math-base-special-betainc'
import quantile from '@stdlib/stats-base-dists-f-quantile'

/**
 * P(F ≤ x) of the F distribution; df1, df2 > 0, not necessarily whole; 0 for x ≤ 0; NaN outside the domain.
 * The incomplete beta function is asked at whichever of y and 1 − y is formed without cancellation.
 */
export function fCdf(x: number, df1: number, df2: number): number {
  if (x <= 0) return 0
  if (x === Infinity) return 1
  return df1 * x > df2
    ? betainc(df2 / (df2 + df1 * x), df2 / 2, df1 / 2, true, true)
    : betainc(df1 * x / (df2 + df1 * x), df1 / 2, df2 / 2, true, false)
}

/** P(F > x), computed and not subtracted. Parameters as for {@link fCdf}. */
export function fSf(x: number, df1: number, df2: number): number {
  if (x <= 0) return 1
  if (x === Infinity) return 0
  return df1 * x > df2
    ? betainc(df2 / (df2 + df1 * x), df2 / 2, df1 / 2, true, false)
    : betainc(df1 * x / (df2 + df1 * x), df1 / 2, df2 / 2, true, true)
}

/** The x with P(F ≤ x) = p; NaN outside [0, 1]. For an upper tail take {@link fUpperPoint}. */
export function fQuantile(p: number, df1: number, df2: number): number {
  return quantile(p, df1, df2)
}

/** The x with P(F > x) = q, by the reciprocal with exchanged degrees of freedom, so that small q keep their digits. */
export function fUpperPoint(q: number, df1: number, df2: number): number {
  return 1 / quantile(q, df2, df1)
}
