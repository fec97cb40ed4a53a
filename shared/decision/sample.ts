import type { PlannedAnalysis } from '../plan/analysisSchema'
import { armOf } from './arms'
import type { Allocation } from './columns'
import type { ArmKnowledge, RuleSample } from './rule'
import type { Selection } from './select'

/** What the extract as a whole says, arms aside. */
export interface Circumstances {
  readonly queryOpen: boolean
  readonly setUndetermined: boolean
  readonly decisionPoint: boolean
  readonly subjectsExpected: number
}

interface Grouping {
  /** Indices of usable subjects, those of one arm side by side. */
  readonly order: readonly number[]
  readonly offsets: Uint32Array
  readonly expectedCompared: number
}

/** Until arms are known, all usable subjects stand in the first group. */
function ungrouped({ subjects, expected }: Selection, groups: number): Grouping {
  const offsets = new Uint32Array(groups + 1).fill(subjects.length, 1)
  return { order: subjects.map((_, index) => index), offsets, expectedCompared: expected.length }
}

function grouped({ subjects, expected }: Selection, arms: readonly string[], allocation: Allocation): Grouping {
  const own = subjects.map(subject => arms.indexOf(armOf(allocation, subject) ?? ''))
  const offsets = new Uint32Array(arms.length + 1)
  const order: number[] = []
  arms.forEach((_, group) => {
    own.forEach((of, index) => {
      if (of === group) order.push(index)
    })
    offsets[group + 1] = order.length
  })
  return { order, offsets, expectedCompared: expected.filter(subject => arms.includes(armOf(allocation, subject) ?? '')).length }
}

/** Brings the selected values of one planned analysis into the order in which its rule reads them. */
export function makeSample(analysis: PlannedAnalysis, selection: Selection, knowledge: ArmKnowledge, allocation: Allocation | null, circumstances: Circumstances): RuleSample {
  const { comparison } = analysis
  const arms = comparison.kind === 'arms' ? comparison.arms : []
  const { order, offsets, expectedCompared } = comparison.kind === 'arms' && knowledge === 'known' && allocation !== null
    ? grouped(selection, arms, allocation)
    : ungrouped(selection, Math.max(1, arms.length))
  const inOrder = (values: Float64Array | null) => (values === null ? null : Float64Array.from(order, index => values[index] ?? Number.NaN))
  return {
    ...circumstances,
    offsets,
    value: Float64Array.from(order, index => selection.value[index] ?? Number.NaN),
    baseline: inOrder(selection.baseline),
    first: inOrder(selection.first),
    firstBaseline: inOrder(selection.firstBaseline),
    usable: selection.subjects.length,
    expected: selection.expected.length,
    expectedCompared,
    arms: comparison.kind === 'arms' ? knowledge : 'known',
  }
}
