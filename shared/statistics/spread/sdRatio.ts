import { checkGroups } from '../checkGroups'
import { standardDeviationKernel } from '../descriptive/standardDeviation'
import { fUpperPoint } from '../distributions/f'
import { raise } from '../invalidSampleError'
import type { Outcome, Sample, SampleProblem } from '../types'
import { clearOutcome, createOutcome, createWorkspace, type Workspace } from '../workspace'

/** Upper tail of each side of two-sided 95 % limits. */
const TAIL = 0.025
/** 2^26: two degrees of freedom below it pack into one whole number that a double holds. */
const KEY = 67108864
/** How many pairs of degrees of freedom a workspace keeps, so that it cannot grow without bound. */
const KEPT_POINTS = 1024

export interface SdRatio {
  /** Largest over smallest standard deviation, at least 1. */
  readonly value: number
  /** Two-sided 95 % limits for two groups under normality; null for more. */
  readonly lower: number | null
  readonly upper: number | null
  readonly n: number
}

function upperPoint(df1: number, df2: number, { fUpperPoints: kept }: Workspace): number {
  const key = df1 * KEY + df2
  const known = kept.get(key)
  if (known !== undefined) return known
  if (kept.size >= KEPT_POINTS) kept.clear()
  const point = fUpperPoint(TAIL, df1, df2)
  kept.set(key, point)
  return point
}

/**
 * Limits for the larger true standard deviation over the smaller. From (s1²/s2²)/(σ1²/σ2²) ~ F, group 1 having
 * the larger estimate, σ1/σ2 lies in [L, U]. If 1 is in between, either may be the larger one: every ratio from
 * 1 to the greater of U and 1/L is then compatible with the data.
 */
function writeLimits(ratio: number, df1: number, df2: number, workspace: Workspace, outcome: Outcome): void {
  const low = ratio / Math.sqrt(upperPoint(df1, df2, workspace))
  const high = ratio * Math.sqrt(upperPoint(df2, df1, workspace))
  outcome.lower = Math.max(1, low)
  outcome.upper = Math.max(high, 1 / low)
}

/** Kernel of {@link sdRatio}: statistic; lower and upper for two groups. */
export function sdRatioKernel(values: Float64Array, offsets: Uint32Array, workspace: Workspace, outcome: Outcome): SampleProblem | null {
  const k = offsets.length - 1
  if (k < 2) return 'too-few-groups'
  let largest = 0
  let smallest = Infinity
  let ofLargest = 0
  for (let group = 0; group < k; group++) {
    const start = offsets[group]!
    const end = offsets[group + 1]!
    if (end - start < 2) return 'sample-too-small'
    const deviation = standardDeviationKernel(values, start, end)
    if (deviation === 0) return 'zero-spread'
    if (!Number.isFinite(deviation)) return 'non-finite-value'
    if (deviation > largest) {
      largest = deviation
      ofLargest = group
    }
    if (deviation < smallest) smallest = deviation
  }
  clearOutcome(outcome)
  outcome.statistic = largest / smallest
  if (k === 2) {
    const first = offsets[1]! - offsets[0]! - 1
    const second = offsets[2]! - offsets[1]! - 1
    writeLimits(outcome.statistic, ofLargest === 0 ? first : second, ofLargest === 0 ? second : first, workspace, outcome)
  }
  return Number.isFinite(outcome.statistic) ? null : 'non-finite-value'
}

/**
 * Ratio of the largest to the smallest standard deviation (n − 1) of the groups, at least 1.
 *
 * For two groups with two-sided 95 % limits from the F distribution, exact under normality and far from it
 * without. For more groups the estimate alone: its distribution depends on all of them, and it grows with their
 * number even where spreads are equal.
 *
 * @param groups k ≥ 2 samples of n_i ≥ 2 finite values, all in one unit; not modified.
 * @returns dimensionless ratio; limits null for more than two groups.
 * @throws {InvalidSampleError} `too-few-groups`, `sample-too-small`, `non-finite-value`, or `zero-spread` when
 *   any group is constant.
 *
 * Invariant under x → a_i + b·x, b ≠ 0, with a shift of its own per group.
 * Source for the limits: Snedecor & Cochran (1989), Statistical Methods, 8th edition.
 */
export function sdRatio(groups: readonly Sample[]): SdRatio {
  const { values, offsets } = checkGroups(groups, { groups: 2, size: 2 })
  const outcome = createOutcome()
  raise(sdRatioKernel(values, offsets, createWorkspace(values.length), outcome))
  const limited = groups.length === 2
  return {
    value: outcome.statistic,
    lower: limited ? outcome.lower : null,
    upper: limited ? outcome.upper : null,
    n: values.length,
  }
}
