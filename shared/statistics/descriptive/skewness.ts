import { checkSample } from '../checkSample'
import { raise } from '../invalidSampleError'
import type { MomentEstimate, Outcome, Sample, SampleProblem } from '../types'
import { clearOutcome, createOutcome } from '../workspace'
import { hasZeroSpread } from '../zeroSpread'
import { deviationScale, meanOffset } from './centre'

/** Half-width of two-sided 95 % limits in standard errors: 1.96 as registered plans print it, not 1.959964. */
export const LIMIT_IN_STANDARD_ERRORS = 1.96

/**
 * Exact standard error of G1 in samples from a normal distribution, √(6n(n−1)/((n−2)(n+1)(n+3))).
 *
 * G1 = k3/k2^1.5 with Fisher's k-statistics; under normality Var k3 = 6nσ⁶/((n−1)(n−2)),
 * E k2³ = σ⁶(n+1)(n+3)/(n−1)², and the ratio is independent of k2, so that its variance is their quotient.
 *
 * @param n number of values, at least 3.
 */
export function skewnessStandardError(n: number): number {
  return Math.sqrt(6 * n / (n - 2) * ((n - 1) / (n + 1)) / (n + 3))
}

/** Kernel of {@link skewness}: statistic, lower, upper. */
export function skewnessKernel(values: Float64Array, start: number, end: number, outcome: Outcome): SampleProblem | null {
  const n = end - start
  if (n < 3) return 'sample-too-small'
  if (hasZeroSpread(values, start, end)) return 'zero-spread'
  const first = values[start]!
  const offset = meanOffset(values, start, end)
  const scale = deviationScale(values, start, end, offset)
  let second = 0
  let third = 0
  for (let i = start; i < end; i++) {
    const deviation = ((values[i]! - first) - offset) / scale
    second += deviation * deviation
    third += deviation * deviation * deviation
  }
  const g1 = Math.sqrt(n / second) * (third / second)
  if (!Number.isFinite(g1)) return 'non-finite-value'
  const halfWidth = LIMIT_IN_STANDARD_ERRORS * skewnessStandardError(n)
  clearOutcome(outcome)
  outcome.statistic = g1 * Math.sqrt(n * (n - 1)) / (n - 2)
  outcome.lower = outcome.statistic - halfWidth
  outcome.upper = outcome.statistic + halfWidth
  return null
}

/**
 * Skewness G1 (type 2, as SAS and SPSS print it), 0 for a symmetric distribution:
 * G1 = g1 √(n(n−1))/(n−2) with g1 = m3/m2^1.5 and m_r = Σ(x − mean)^r / n. Limits are G1 ± 1.96 SE(G1).
 *
 * The measure of the symmetry prerequisite too, judged on within-subject differences (for the signed-rank test)
 * or on the values of a single sample. G1 = 0 does not prove symmetry: it says only that the third moment shows
 * none of the departure. The standard error is that of normal samples; with heavier tails G1 varies more, and
 * the limits are too narrow.
 *
 * @param sample n ≥ 3 finite values in one unit; not modified.
 * @returns value, its limits and standard error, dimensionless.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`, `zero-spread`.
 *
 * Invariant under x → a + b·x, b > 0; changes its sign with b < 0. |G1| ≤ √n.
 * Source: Joanes & Gill (1998), The Statistician 47:183–189, doi:10.1111/1467-9884.00122.
 */
export function skewness(sample: Sample): MomentEstimate {
  const values = checkSample(sample, 3)
  const outcome = createOutcome()
  raise(skewnessKernel(values, 0, values.length, outcome))
  return {
    value: outcome.statistic,
    lower: outcome.lower,
    upper: outcome.upper,
    standardError: skewnessStandardError(values.length),
    n: values.length,
  }
}
