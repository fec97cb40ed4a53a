import { checkSample } from '../checkSample'
import { raise } from '../invalidSampleError'
import type { MomentEstimate, Outcome, Sample, SampleProblem } from '../types'
import { clearOutcome, createOutcome } from '../workspace'
import { hasZeroSpread } from '../zeroSpread'
import { deviationScale, meanOffset } from './centre'
import { LIMIT_IN_STANDARD_ERRORS } from './skewness'

/**
 * Exact standard error of G2 in samples from a normal distribution,
 * √(24n(n−1)²/((n−3)(n−2)(n+3)(n+5))); it follows from Var k4 = 24n(n+1)σ⁸/((n−1)(n−2)(n−3)) and
 * E k2⁴ = σ⁸(n+1)(n+3)(n+5)/(n−1)³ as for the skewness.
 *
 * @param n number of values, at least 4.
 */
export function excessKurtosisStandardError(n: number): number {
  return Math.sqrt(24 * n / (n - 3) * ((n - 1) / (n - 2)) * ((n - 1) / (n + 3)) / (n + 5))
}

/** Kernel of {@link excessKurtosis}: statistic, lower, upper. */
export function excessKurtosisKernel(values: Float64Array, start: number, end: number, outcome: Outcome): SampleProblem | null {
  const n = end - start
  if (n < 4) return 'sample-too-small'
  if (hasZeroSpread(values, start, end)) return 'zero-spread'
  const first = values[start]!
  const offset = meanOffset(values, start, end)
  const scale = deviationScale(values, start, end, offset)
  let second = 0
  let fourth = 0
  for (let i = start; i < end; i++) {
    const deviation = ((values[i]! - first) - offset) / scale
    const square = deviation * deviation
    second += square
    fourth += square * square
  }
  const g2 = n * (fourth / second / second) - 3
  if (!Number.isFinite(g2)) return 'non-finite-value'
  const halfWidth = LIMIT_IN_STANDARD_ERRORS * excessKurtosisStandardError(n)
  clearOutcome(outcome)
  outcome.statistic = (n - 1) / ((n - 2) * (n - 3)) * ((n + 1) * g2 + 6)
  outcome.lower = outcome.statistic - halfWidth
  outcome.upper = outcome.statistic + halfWidth
  return null
}

/**
 * Excess kurtosis G2 (type 2, as SAS and SPSS print it), 0 for a normal distribution:
 * G2 = (n−1)/((n−2)(n−3)) · ((n+1) g2 + 6) with g2 = m4/m2² − 3. Limits are G2 ± 1.96 SE(G2), the standard
 * error being that of normal samples.
 *
 * @param sample n ≥ 4 finite values in one unit; not modified.
 * @returns value, its limits and standard error, dimensionless.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`, `zero-spread`.
 *
 * Invariant under x → a + b·x, b ≠ 0.
 * Source: Joanes & Gill (1998), The Statistician 47:183–189, doi:10.1111/1467-9884.00122.
 */
export function excessKurtosis(sample: Sample): MomentEstimate {
  const values = checkSample(sample, 4)
  const outcome = createOutcome()
  raise(excessKurtosisKernel(values, 0, values.length, outcome))
  return {
    value: outcome.statistic,
    lower: outcome.lower,
    upper: outcome.upper,
    standardError: excessKurtosisStandardError(values.length),
    n: values.length,
  }
}
