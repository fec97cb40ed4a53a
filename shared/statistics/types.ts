/** Values of one sample, all in one unit. Never modified. */
export type Sample = ArrayLike<number>

/** Closed list of the reasons for which a procedure is undefined for a sample. */
export type SampleProblem = 'too-few-groups' | 'sample-too-small' | 'sample-too-large' | 'non-finite-value' | 'zero-spread'

/** A test of a hypothesis; `pValue` is the probability, under it, of a statistic at least as extreme. */
export interface TestResult {
  readonly statistic: number
  readonly pValue: number
  /** Values used. */
  readonly n: number
}

export interface FTestResult extends TestResult {
  readonly df1: number
  readonly df2: number
}

/** A moment with its two-sided 95 % confidence limits. */
export interface MomentEstimate {
  readonly value: number
  readonly lower: number
  readonly upper: number
  readonly standardError: number
  readonly n: number
}

/**
 * What a kernel writes its figures to, made once and used again. A kernel that returns null has set every field:
 * NaN where its procedure has no such figure. After a refusal the fields mean nothing.
 */
export interface Outcome {
  /** The statistic, or the estimated size. */
  statistic: number
  pValue: number
  df1: number
  df2: number
  /** Two-sided 95 % confidence limits of the estimated size. */
  lower: number
  upper: number
}
