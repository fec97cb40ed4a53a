import exp from '@stdlib/math-base-special-exp'
import { checkSample } from '../checkSample'
import { deviationScale, meanOffset, sumOfSquares } from '../descriptive/centre'
import { normalLogCdf } from '../distributions/normal'
import { raise } from '../invalidSampleError'
import { sortAscending } from '../sortAscending'
import type { Outcome, Sample, SampleProblem, TestResult } from '../types'
import { clearOutcome, createOutcome, createWorkspace, type Workspace } from '../workspace'
import { isRounding } from '../zeroSpread'

export const ANDERSON_DARLING_LEAST = 8

export interface AndersonDarlingResult extends TestResult {
  /** A*² = A²(1 + 0.75/n + 2.25/n²), which the p-value is read from. */
  readonly adjusted: number
}

/** A² for a sample of n, adjusted for its size: D'Agostino & Stephens (1986), table 4.7. */
function adjustedForSize(statistic: number, n: number): number {
  return statistic * (1 + 0.75 / n + 2.25 / (n * n))
}

/**
 * p of the adjusted statistic, mean and standard deviation estimated: D'Agostino & Stephens (1986), table 4.9,
 * with the constant that nortest 1.0-4 returns from 10 upwards, where the last polynomial turns.
 */
function pValueOf(a: number): number {
  if (a < 0.2) return 1 - exp(-13.436 + 101.14 * a - 223.73 * a * a)
  if (a < 0.34) return 1 - exp(-8.318 + 42.796 * a - 59.938 * a * a)
  if (a < 0.6) return exp(0.9177 - 4.279 * a - 1.38 * a * a)
  if (a < 10) return exp(1.2937 - 5.709 * a + 0.0186 * a * a)
  return 3.7e-24
}

/**
 * A² of ordered values in standard units, from logarithms of both tails, so that it stays finite. Each term is
 * taken less its mean under the sum, −n, and the rest added up with Kahan's compensation: A² is a small
 * difference of numbers as large as n².
 */
function statisticOf(z: Float64Array, n: number): number {
  let sum = 0
  let lost = 0
  for (let i = 0; i < n; i++) {
    const logarithms = normalLogCdf(z[i]!) + normalLogCdf(-z[n - 1 - i]!)
    const term = ((2 * i + 1) * logarithms + n) - lost
    const next = sum + term
    lost = (next - sum) - term
    sum = next
  }
  return -sum / n
}

/** Kernel of {@link andersonDarling}: statistic (A², not adjusted), pValue. */
export function andersonDarlingKernel(values: Float64Array, start: number, end: number, workspace: Workspace, outcome: Outcome): SampleProblem | null {
  const n = end - start
  if (n < ANDERSON_DARLING_LEAST) return 'sample-too-small'
  const { ordered, spare } = workspace
  for (let i = 0; i < n; i++) ordered[i] = values[start + i]!
  sortAscending(ordered, 0, n, spare)
  const low = ordered[0]!
  const range = ordered[n - 1]! - low
  if (isRounding(range, Math.max(Math.abs(low), Math.abs(ordered[n - 1]!)))) return 'zero-spread'
  if (range === Infinity) return 'non-finite-value'
  const offset = meanOffset(ordered, 0, n)
  const scale = deviationScale(ordered, 0, n, offset)
  const deviation = Math.sqrt(sumOfSquares(ordered, 0, n, offset, scale) / (n - 1))
  for (let i = 0; i < n; i++) ordered[i] = ((ordered[i]! - low) - offset) / scale / deviation
  clearOutcome(outcome)
  outcome.statistic = statisticOf(ordered, n)
  outcome.pValue = pValueOf(adjustedForSize(outcome.statistic, n))
  return null
}

/**
 * Anderson–Darling test with estimated mean and standard deviation; null hypothesis: the values are a sample
 * from some normal distribution.
 *
 * A² = −n − (1/n) Σ (2i − 1)(ln Φ(z_(i)) + ln Φ(−z_(n+1−i))), z = (x − mean)/SD with n − 1; large A² speaks
 * against. It weighs the tails more than the middle. p from A*² = A²(1 + 0.75/n + 2.25/n²) by four
 * approximations; 3.7e-24 from A*² = 10 upwards, where they end.
 *
 * @param sample n ≥ 8 finite values in one unit; not modified.
 * @returns A², A*² (both dimensionless) and p.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value`, `zero-spread`.
 *
 * Invariant under x → a + b·x, b ≠ 0.
 * Source: Stephens in D'Agostino & Stephens (1986), Goodness-of-Fit Techniques, section 4.8.
 */
export function andersonDarling(sample: Sample): AndersonDarlingResult {
  const values = checkSample(sample, ANDERSON_DARLING_LEAST)
  const outcome = createOutcome()
  raise(andersonDarlingKernel(values, 0, values.length, createWorkspace(values.length), outcome))
  const { statistic, pValue } = outcome
  return { statistic, adjusted: adjustedForSize(statistic, values.length), pValue, n: values.length }
}
