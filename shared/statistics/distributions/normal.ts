import erfc from '@stdlib/math-base-special-erfc'
import erfcinv from '@stdlib/math-base-special-erfcinv'
import ln from '@stdlib/math-base-special-ln'
import log1p from '@stdlib/math-base-special-log1p'

const HALF_LN_TWO_PI = 0.9189385332046728
/** Below it the distribution function nears underflow, and seven terms of its expansion are exact to 3e-15. */
const FAR = -20

/** P(Z ≤ z) of the standard normal distribution; NaN for NaN. */
export function normalCdf(z: number): number {
  return erfc(-z * Math.SQRT1_2) / 2
}

/** P(Z > z) of the standard normal distribution, computed and not subtracted; NaN for NaN. */
export function normalSf(z: number): number {
  return erfc(z * Math.SQRT1_2) / 2
}

/**
 * The z with P(Z ≤ z) = p; −∞ at 0, ∞ at 1, NaN outside [0, 1]. For an upper tail q take −normalQuantile(q):
 * 1 − q has lost its digits.
 */
export function normalQuantile(p: number): number {
  // erfcinv is relatively exact on (0, 1]; 1 − p is exact from a half upwards.
  return p >= 0.5 ? Math.SQRT2 * erfcinv(2 * (1 - p)) : -Math.SQRT2 * erfcinv(2 * p)
}

/** Mills' expansion, 1 − 1/z² + 3/z⁴ − 15/z⁶ + …, nested. */
function millsSeries(z: number): number {
  const r = 1 / (z * z)
  return 1 - r * (1 - 3 * r * (1 - 5 * r * (1 - 7 * r * (1 - 9 * r * (1 - 11 * r * (1 - 13 * r))))))
}

/** ln P(Z ≤ z), finite for every finite z with z² finite; NaN for NaN. */
export function normalLogCdf(z: number): number {
  if (z < FAR) return -z * z / 2 - ln(-z) - HALF_LN_TWO_PI + ln(millsSeries(z))
  return z < 0 ? ln(normalCdf(z)) : log1p(-normalSf(z))
}
