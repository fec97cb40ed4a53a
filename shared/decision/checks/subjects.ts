import type { Requirement } from '../../plan/prerequisiteSchema'
import { countNotPositive } from '../../statistics/descriptive/notPositive'
import { MET, NOT_ASSESSABLE, NOT_MET, outcome } from '../codes'
import { BROKEN, LIMIT, figureAt, type RuleSample, sampleAt, sizeOf, type TraceLayout, VALUE, wholeAt, type Workspace } from '../rule'

type Count = Extract<Requirement, { kind: 'count' }>
type Missing = Extract<Requirement, { kind: 'missing-values' }>

const told = (broken: boolean): number => outcome(broken ? NOT_MET : MET)

function trace(workspace: Workspace, at: number, value: number, limit: number, broken: boolean): void {
  workspace.trace[at + VALUE] = value
  workspace.trace[at + LIMIT] = limit
  workspace.trace[at + BROKEN] = broken ? 1 : 0
}

/** A share of a whole number of subjects, rounded up; products such as 0.1 × 30 may lie a rounding error above it. */
const leastWhole = (exact: number): number => Math.ceil(exact - 1e-9)

/**
 * At least so many subjects with a usable value, in each arm or in all.
 *
 * @param shares of each compared arm among all subjects, from the allocation ratio; [1] for `in-all`.
 */
export function countCheck({ scope, least }: Count, shares: readonly number[], layout: TraceLayout) {
  const needed = (share: number, subjectsExpected: number) => (least.kind === 'number' ? least.n : leastWhole(least.share * subjectsExpected * share))
  if (scope === 'in-all') {
    return (sample: RuleSample, workspace: Workspace): number => {
      const limit = needed(1, sample.subjectsExpected)
      trace(workspace, wholeAt(layout, 0), sample.usable, limit, sample.usable < limit)
      return told(sample.usable < limit)
    }
  }
  return ({ offsets, subjectsExpected }: RuleSample, workspace: Workspace): number => {
    let broken = false
    shares.forEach((share, group) => {
      const n = (offsets[group + 1] ?? 0) - (offsets[group] ?? 0)
      const limit = needed(share, subjectsExpected)
      workspace.trace[sampleAt(layout, group) + VALUE] = n
      workspace.trace[sampleAt(layout, group) + BROKEN] = n < limit ? 1 : 0
      trace(workspace, figureAt(layout, group, 0), n, limit, n < limit)
      broken ||= n < limit
    })
    return told(broken)
  }
}

/** At most so large a share of the subjects without a usable value. With nobody to expect there is no share. */
export function missingCheck({ most }: Missing, scope: 'compared' | 'all', layout: TraceLayout) {
  return (sample: RuleSample, workspace: Workspace): number => {
    const expected = scope === 'all' ? sample.expected : sample.expectedCompared
    const usable = scope === 'all' ? sample.usable : sizeOf(sample)
    if (expected === 0) return outcome(NOT_ASSESSABLE, 'too-few-subjects')
    const share = (expected - usable) / expected
    trace(workspace, wholeAt(layout, 0), share, most, share > most)
    return told(share > most)
  }
}

const countIn = (values: Float64Array | null, n: number, shift: number): number => {
  if (values === null) return 0
  if (shift === 0) return countNotPositive(values, 0, n)
  let count = 0
  for (let i = 0; i < n; i++) if (!((values[i] ?? 0) + shift > 0)) count++
  return count
}

/** Every value that enters, before derivation and plus the shift, lies above zero. */
export function positiveCheck(shift: number, layout: TraceLayout) {
  return (sample: RuleSample, workspace: Workspace): number => {
    const { value, baseline, first, firstBaseline } = sample
    const n = sizeOf(sample)
    workspace.trace[sampleAt(layout, 0) + VALUE] = n
    if (n === 0) return outcome(NOT_ASSESSABLE, 'too-few-data')
    const count = countIn(value, n, shift) + countIn(baseline, n, shift) + countIn(first, n, shift) + countIn(firstBaseline, n, shift)
    workspace.trace[sampleAt(layout, 0) + BROKEN] = count > 0 ? 1 : 0
    trace(workspace, figureAt(layout, 0, 0), count, 0, count > 0)
    return told(count > 0)
  }
}
