import type { Outcome } from './types'

/**
 * Room that kernels work in, made once for the largest number of values and used again: a kernel allocates
 * nothing but, at the first use of a sample size, what it keeps for the next. Not to be shared between threads.
 */
export interface Workspace {
  readonly capacity: number
  /** Ordered copies of values. */
  readonly ordered: Float64Array
  readonly scratch: Float64Array
  readonly spare: Float64Array
  /** Shapiro–Wilk weights by n. */
  readonly shapiroWilkWeights: Map<number, Float64Array>
  /** 97.5 % points of F by both degrees of freedom. */
  readonly fUpperPoints: Map<number, number>
}

/** @param capacity the largest number of values, over all groups, that a kernel will be given. */
export function createWorkspace(capacity: number): Workspace {
  return {
    capacity,
    ordered: new Float64Array(capacity),
    scratch: new Float64Array(capacity),
    spare: new Float64Array(capacity),
    shapiroWilkWeights: new Map(),
    fUpperPoints: new Map(),
  }
}

export function createOutcome(): Outcome {
  return { statistic: Number.NaN, pValue: Number.NaN, df1: Number.NaN, df2: Number.NaN, lower: Number.NaN, upper: Number.NaN }
}

/** Sets every figure that the procedure does not have to NaN. */
export function clearOutcome(outcome: Outcome): void {
  outcome.statistic = Number.NaN
  outcome.pValue = Number.NaN
  outcome.df1 = Number.NaN
  outcome.df2 = Number.NaN
  outcome.lower = Number.NaN
  outcome.upper = Number.NaN
}
