import asin from '@stdlib/math-base-special-asin'
import exp from '@stdlib/math-base-special-exp'
import ln from '@stdlib/math-base-special-ln'
import { checkSample } from '../checkSample'
import { normalSf } from '../distributions/normal'
import { raise } from '../invalidSampleError'
import { sortAscending } from '../sortAscending'
import type { Outcome, Sample, SampleProblem, TestResult } from '../types'
import { clearOutcome, createOutcome, createWorkspace, type Workspace } from '../workspace'
import { isRounding } from '../zeroSpread'
import { polynomial, shapiroWilkWeights } from './shapiroWilkWeights'

export const SHAPIRO_WILK_RANGE = { least: 3, most: 5000 } as const

/**
 * Normalising transformation of W: mean and log of the standard deviation, as polynomials in n for 4 ≤ n ≤ 11
 * and in ln n above, ascending powers. Royston (1995), Applied Statistics 44:547–551, AS R94.
 */
const GAMMA = [-2.273, 0.459] as const
const SMALL_MEAN = [0.544, -0.39978, 0.025054, -6.714e-4] as const
const SMALL_LN_SD = [1.3822, -0.77857, 0.062767, -0.0020322] as const
const LARGE_MEAN = [-1.5861, -0.31082, -0.083751, 0.0038915] as const
const LARGE_LN_SD = [-0.4803, -0.082676, 0.0030302] as const
const SIX_OVER_PI = 1.909859317102744

/**
 * Exact p for n = 3: (6/π)(asin √W − asin √¾), the difference of the two angles taken as one so that a W near
 * its least value ¾ keeps its digits.
 */
function pValueOfThree(complement: number): number {
  const w = 1 - complement
  const sine = (w - 0.75) / (0.5 * Math.sqrt(w) + Math.sqrt(0.75 * complement))
  return SIX_OVER_PI * asin(Math.max(0, sine))
}

function pValueOf(complement: number, n: number): number {
  if (n === 3) return pValueOfThree(complement)
  const y = ln(complement)
  if (n <= 11) {
    // γ − y is positive: even at the least possible W, n·a_n²/(n − 1), ln(1 − W) stays below γ for these n.
    return normalSf((-ln(polynomial(GAMMA, n) - y) - polynomial(SMALL_MEAN, n)) / exp(polynomial(SMALL_LN_SD, n)))
  }
  const x = ln(n)
  return normalSf((y - polynomial(LARGE_MEAN, x)) / exp(polynomial(LARGE_LN_SD, x)))
}

/** How many sample sizes a workspace keeps the weights of, so that it cannot grow without bound. */
const KEPT_SIZES = 32

function weightsFor(n: number, { shapiroWilkWeights: kept }: Workspace): Float64Array {
  const known = kept.get(n)
  if (known) return known
  if (kept.size >= KEPT_SIZES) kept.clear()
  const weights = shapiroWilkWeights(n)
  kept.set(n, weights)
  return weights
}

/** 1 − W of ordered values with the given range; formed as a product, because W itself is close to 1. */
function complementOfW(ordered: Float64Array, n: number, range: number, weights: Float64Array): number {
  const low = ordered[0]!
  let sum = 0
  for (let i = 0; i < n; i++) sum += (ordered[i]! - low) / range
  const mean = sum / n
  let squares = 0
  for (let i = 0; i < n; i++) {
    const deviation = (ordered[i]! - low) / range - mean
    squares += deviation * deviation
  }
  let weighted = 0
  let weightSquares = 0
  for (let i = 0; i < weights.length; i++) {
    const weight = weights[i]!
    weighted += weight * ((ordered[n - 1 - i]! - ordered[i]!) / range)
    weightSquares += 2 * weight * weight
  }
  const root = Math.sqrt(weightSquares * squares)
  return Math.max(0, (root - weighted) * (root + weighted) / (weightSquares * squares))
}

/** Kernel of {@link shapiroWilk}: statistic, pValue. */
export function shapiroWilkKernel(values: Float64Array, start: number, end: number, workspace: Workspace, outcome: Outcome): SampleProblem | null {
  const n = end - start
  if (n < SHAPIRO_WILK_RANGE.least) return 'sample-too-small'
  if (n > SHAPIRO_WILK_RANGE.most) return 'sample-too-large'
  const { ordered, spare } = workspace
  for (let i = 0; i < n; i++) ordered[i] = values[start + i]!
  sortAscending(ordered, 0, n, spare)
  const range = ordered[n - 1]! - ordered[0]!
  if (isRounding(range, Math.max(Math.abs(ordered[0]!), Math.abs(ordered[n - 1]!)))) return 'zero-spread'
  if (range === Infinity) return 'non-finite-value'
  const complement = complementOfW(ordered, n, range, weightsFor(n, workspace))
  clearOutcome(outcome)
  outcome.statistic = 1 - complement
  outcome.pValue = pValueOf(complement, n)
  return null
}

/**
 * Shapiro–Wilk test; null hypothesis: the values are a sample from some normal distribution.
 *
 * W = (Σ a_i x_(i))² / Σ(x − mean)² over the order statistics x_(i), with Royston's approximate weights a_i;
 * W ≤ 1, small W speaks against. p is exact for n = 3 and comes from a normalising transformation of 1 − W
 * with separate polynomials for 4 ≤ n ≤ 11 and n ≥ 12.
 *
 * @param sample 3 ≤ n ≤ 5000 finite values in one unit; not modified.
 * @returns W (dimensionless) and p.
 * @throws {InvalidSampleError} `sample-too-small`, `sample-too-large`, `non-finite-value`, `zero-spread`.
 *
 * Invariant under x → a + b·x, b ≠ 0. Many ties, as on coarse scales, make it reject for the scale alone.
 * Source: Royston (1995), Applied Statistics 44:547–551, AS R94, doi:10.2307/2986146.
 */
export function shapiroWilk(sample: Sample): TestResult {
  const values = checkSample(sample, SHAPIRO_WILK_RANGE.least, SHAPIRO_WILK_RANGE.most)
  const outcome = createOutcome()
  raise(shapiroWilkKernel(values, 0, values.length, createWorkspace(values.length), outcome))
  return { statistic: outcome.statistic, pValue: outcome.pValue, n: values.length }
}
