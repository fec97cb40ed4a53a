import { normalQuantile } from '../distributions/normal'

/**
 * Weights of the extreme and the second order statistic as polynomials in n^(−1/2), ascending powers.
 * Royston (1992), Statistics and Computing 2:117–119, doi:10.1007/BF01891203; unchanged in AS R94 (1995).
 */
const EXTREME = [0, 0.221157, -0.147981, -2.07119, 4.434685, -2.706056] as const
const SECOND = [0, 0.042981, -0.293762, -1.752461, 5.682633, -3.582633] as const

/** Σ coefficient_j x^j by Horner's scheme. */
export function polynomial(coefficients: readonly number[], x: number): number {
  return coefficients.reduceRight((sum, coefficient) => sum * x + coefficient, 0)
}

/** Blom's approximation to the expected order statistics of a standard normal sample, the lower half, negated. */
function expectedUpperHalf(n: number): Float64Array {
  return Float64Array.from({ length: n >> 1 }, (_, index) => -normalQuantile((index + 1 - 0.375) / (n + 0.25)))
}

/**
 * Weights a_n, a_(n−1), … of the upper half of the order statistics, largest first; those of the lower half are
 * their negatives and a middle one is 0. Their squares add up to one half.
 *
 * @param n number of values, at least 3.
 */
export function shapiroWilkWeights(n: number): Float64Array {
  if (n === 3) return Float64Array.of(Math.SQRT1_2)
  const m = expectedUpperHalf(n)
  const squares = 2 * m.reduce((sum, expected) => sum + expected * expected, 0)
  const root = Math.sqrt(squares)
  const fitted = (n > 5 ? [EXTREME, SECOND] : [EXTREME])
    .map((coefficients, index) => polynomial(coefficients, 1 / Math.sqrt(n)) + m[index]! / root)
  const left = fitted.reduce((sum, _, index) => sum - 2 * m[index]! * m[index]!, squares)
  const right = fitted.reduce((sum, weight) => sum - 2 * weight * weight, 1)
  const divisor = Math.sqrt(left / right)
  return m.map((expected, index) => fitted[index] ?? expected / divisor)
}
