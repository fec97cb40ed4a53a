import { checkGroups } from '../checkGroups'
import { powerScale } from '../descriptive/scale'
import { fSf } from '../distributions/f'
import { raise } from '../invalidSampleError'
import { sortAscending } from '../sortAscending'
import type { FTestResult, Outcome, Sample, SampleProblem } from '../types'
import { clearOutcome, createOutcome, createWorkspace, type Workspace } from '../workspace'
import { isRounding } from '../zeroSpread'

/**
 * Writes |x − group median| of one group to `into` and returns the group's largest absolute value. Values are
 * taken from the group's least, so that values far from 0 keep their digits.
 */
function writeDeviations(values: Float64Array, start: number, end: number, { ordered, spare }: Workspace, into: Float64Array): number {
  const n = end - start
  for (let i = 0; i < n; i++) ordered[i] = values[start + i]!
  sortAscending(ordered, 0, n, spare)
  const low = ordered[0]!
  const magnitude = Math.max(Math.abs(low), Math.abs(ordered[n - 1]!))
  const centre = ((ordered[(n - 1) >> 1]! - low) + (ordered[n >> 1]! - low)) / 2
  for (let i = start; i < end; i++) into[i] = Math.abs((values[i]! - low) - centre)
  return magnitude
}

/** Brings deviations of extreme size to where their squares exist; returns the divisor, ∞ where one overflows. */
function rescale(deviations: Float64Array, start: number, end: number): number {
  let largest = 0
  for (let i = start; i < end; i++) if (deviations[i]! > largest) largest = deviations[i]!
  const scale = powerScale(largest)
  if (scale !== 1 && scale !== 0) for (let i = start; i < end; i++) deviations[i] = deviations[i]! / scale
  return scale
}

function meanOf(values: Float64Array, start: number, end: number): number {
  let sum = 0
  for (let i = start; i < end; i++) sum += values[i]!
  return sum / (end - start)
}

/**
 * F ratio between and within groups of deviations, both sums of squares centred; NaN when no deviation differs
 * from its group's mean by more than rounding.
 */
function ratioOfMeanSquares(deviations: Float64Array, offsets: Uint32Array, magnitude: number): number {
  const k = offsets.length - 1
  const n = offsets[k]!
  const grandMean = meanOf(deviations, 0, n)
  let between = 0
  let within = 0
  let reach = 0
  for (let group = 0; group < k; group++) {
    const start = offsets[group]!
    const end = offsets[group + 1]!
    const groupMean = meanOf(deviations, start, end)
    between += (end - start) * (groupMean - grandMean) * (groupMean - grandMean)
    for (let i = start; i < end; i++) {
      const distance = Math.abs(deviations[i]! - groupMean)
      within += distance * distance
      if (distance > reach) reach = distance
    }
  }
  return isRounding(reach, magnitude) ? Number.NaN : (between / (k - 1)) / (within / (n - k))
}

/** Kernel of {@link brownForsythe}: statistic, df1, df2, pValue. The first group begins at 0. */
export function brownForsytheKernel(values: Float64Array, offsets: Uint32Array, workspace: Workspace, outcome: Outcome): SampleProblem | null {
  const k = offsets.length - 1
  if (k < 2) return 'too-few-groups'
  const deviations = workspace.scratch
  let magnitude = 0
  for (let group = 0; group < k; group++) {
    if (offsets[group + 1]! - offsets[group]! < 2) return 'sample-too-small'
    magnitude = Math.max(magnitude, writeDeviations(values, offsets[group]!, offsets[group + 1]!, workspace, deviations))
  }
  const scale = rescale(deviations, 0, offsets[k]!)
  if (scale === Infinity) return 'non-finite-value'
  const statistic = scale === 0 ? Number.NaN : ratioOfMeanSquares(deviations, offsets, magnitude / scale)
  if (Number.isNaN(statistic)) return 'zero-spread'
  clearOutcome(outcome)
  outcome.statistic = statistic
  outcome.df1 = k - 1
  outcome.df2 = offsets[k]! - k
  outcome.pValue = fSf(statistic, outcome.df1, outcome.df2)
  return null
}

/**
 * Brown–Forsythe test; null hypothesis: the groups have equal variances. One-way analysis of variance of
 * z = |x − group median|: F = [Σ n_i (z̄_i − z̄)²/(k − 1)] / [ΣΣ (z − z̄_i)²/(N − k)]. The means of the values
 * themselves are never compared.
 *
 * @param groups k ≥ 2 samples of n_i ≥ 2 finite values, all in one unit; not modified. With every n_i = 2 the
 *   deviations within a group are equal and the test is undefined (`zero-spread`).
 * @returns F (dimensionless), df1 = k − 1, df2 = N − k, pValue = P(F ≥ statistic).
 * @throws {InvalidSampleError} `too-few-groups`, `sample-too-small`, `non-finite-value`, or `zero-spread` when
 *   within every group all distances from the median are equal up to rounding.
 *
 * Invariant under x → a + b·x, b ≠ 0. Conservative in small groups.
 * Source: Brown & Forsythe (1974), JASA 69:364–367, doi:10.1080/01621459.1974.10482955.
 */
export function brownForsythe(groups: readonly Sample[]): FTestResult {
  const { values, offsets } = checkGroups(groups, { groups: 2, size: 2 })
  const outcome = createOutcome()
  raise(brownForsytheKernel(values, offsets, createWorkspace(values.length), outcome))
  const { statistic, df1, df2, pValue } = outcome
  return { statistic, df1, df2, pValue, n: values.length }
}
